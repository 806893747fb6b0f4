#include "fmm/verification/exact_sums.hpp"

#include <algorithm>

#include "fmm/base/padding.hpp"

namespace farsum {
namespace {

constexpr std::size_t kPiece = 1 << 12;  // sources per piece: 128 KiB stay in the second-level cache
constexpr std::size_t kPiecesPerTask = 4;

void add_piece(const SourceArrays& sources, std::size_t begin, std::size_t end, const ExactTarget& target,
               const kernels::KernelTable& kernels, ExactValue& value) {
  const std::int64_t self = target.self - std::int64_t(begin);
  const bool inside = target.self >= 0 && self >= 0 && target.self < std::int64_t(end);
  const kernels::PairSums sums{sources.x + begin,
                               sources.y + begin,
                               sources.z + begin,
                               sources.q + begin,
                               round_up(end - begin, kSourcePad),
                               &target.x,
                               &target.y,
                               &target.z,
                               1,
                               inside ? std::ptrdiff_t(self) : -1,
                               &value.potential,
                               &value.field[0],
                               &value.field[1],
                               &value.field[2],
                               &value.nearest_squared};
  kernels.exact_sums({sums, &value.potential_scale, &value.field_scale});
}

}  // namespace

std::vector<ExactValue> exact_values(const SourceArrays& sources, std::span<const ExactTarget> targets,
                                     const kernels::KernelTable& kernels, Executor& executor) {
  ExactValue fresh;
  fresh.nearest_squared = 1e300;
  const std::size_t pieces = (sources.count + kPiece - 1) / kPiece, n = targets.size();
  std::vector<ExactValue> parts(pieces * n, fresh);
  executor.for_each(pieces, kPiecesPerTask, [&](std::size_t first, std::size_t last, int) {
    for (std::size_t piece = first; piece < last; ++piece)
      for (std::size_t t = 0; t < n; ++t)
        add_piece(sources, piece * kPiece, std::min(sources.count, (piece + 1) * kPiece), targets[t], kernels,
                  parts[piece * n + t]);
  });
  std::vector<ExactValue> values(n, fresh);
  for (std::size_t t = 0; t < n; ++t) {
    long double potential = 0, field[3] = {0, 0, 0}, potential_scale = 0, field_scale = 0;
    for (std::size_t piece = 0; piece < pieces; ++piece) {
      const ExactValue& part = parts[piece * n + t];
      potential += part.potential;
      for (int axis = 0; axis < 3; ++axis) field[axis] += part.field[axis];
      potential_scale += part.potential_scale;
      field_scale += part.field_scale;
      values[t].nearest_squared = std::min(values[t].nearest_squared, part.nearest_squared);
    }
    values[t].potential = double(potential);
    for (int axis = 0; axis < 3; ++axis) values[t].field[axis] = double(field[axis]);
    values[t].potential_scale = double(potential_scale);
    values[t].field_scale = double(field_scale);
  }
  return values;
}

}  // namespace farsum
