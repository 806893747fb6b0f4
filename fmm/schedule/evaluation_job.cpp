#include "fmm/schedule/evaluation_job.hpp"

namespace farsum {

void ResultBuffer::deliver(const ResultView& view, const std::uint32_t* index, PowerOfTwo potential_unit, PowerOfTwo field_unit,
                           Executor& executor) const {
  constexpr std::size_t kGrain = 1 << 14;
  const std::size_t n = potential_.size();
  AlignedArray<std::uint32_t> place_of(ledger_, n);
  executor.for_each(n, kGrain, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t place = begin; place < end; ++place) place_of[index[place]] = std::uint32_t(place);
  });
  executor.for_each(n, kGrain, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t i = begin; i < end; ++i) {
      const std::size_t place = place_of[i];
      const double* const row = &field_[3 * place];
      const std::ptrdiff_t at = std::ptrdiff_t(i) * view.stride;
      if (view.potential) view.potential[at] = potential_unit(potential_[place]);
      if (!view.field_x) continue;
      view.field_x[at] = field_unit(row[0]);
      view.field_y[at] = field_unit(row[1]);
      view.field_z[at] = field_unit(row[2]);
    }
  });
}

}  // namespace farsum
