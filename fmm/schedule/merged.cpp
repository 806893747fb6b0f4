#include "fmm/schedule/merged.hpp"

namespace farsum {

Session::Merged::Merged(DistinctPlaces places, const PointsView& positions, const ChargesView& charges, const Options& options)
    : places_(std::move(places)), session_(options) {
  for (std::uint32_t first : places_.first) {
    const std::ptrdiff_t at = std::ptrdiff_t(first) * positions.stride;
    x_.push_back(positions.x[at]);
    y_.push_back(positions.y[at]);
    z_.push_back(positions.z[at]);
  }
  sum_charges(charges);
  session_.set_charges({x_.data(), y_.data(), z_.data(), x_.size(), 1}, {q_.data(), q_.size(), 1});
}

void Session::Merged::sum_charges(const ChargesView& charges) {
  q_.assign(places_.first.size(), 0.0);
  for (std::size_t i = 0; i < charges.count; ++i) q_[places_.place_of[i]] += charges.q[std::ptrdiff_t(i) * charges.stride];
}

void Session::Merged::update_charges(const ChargesView& charges) {
  sum_charges(charges);
  session_.update_charges({q_.data(), q_.size(), 1});
}

ResultView Session::Merged::own_view(Output outputs) {
  const std::size_t n = places();
  values_.resize(4 * n);
  ResultView view;
  if (has(outputs, Output::potential)) view.potential = values_.data();
  if (has(outputs, Output::field)) {
    view.field_x = values_.data() + n;
    view.field_y = values_.data() + 2 * n;
    view.field_z = values_.data() + 3 * n;
  }
  return view;
}

void Session::Merged::evaluate(Output outputs, const ResultView& result) {
  const ResultView own = own_view(outputs);
  session_.evaluate(outputs, own);
  for (std::size_t i = 0; i < places_.place_of.size(); ++i) {
    const std::ptrdiff_t at = std::ptrdiff_t(i) * result.stride;
    const std::uint32_t p = places_.place_of[i];
    if (own.potential) result.potential[at] = own.potential[p];
    if (!own.field_x) continue;
    result.field_x[at] = own.field_x[p];
    result.field_y[at] = own.field_y[p];
    result.field_z[at] = own.field_z[p];
  }
}

ErrorMeasure Session::Merged::measure(Output outputs, const ResultView& result) {
  const ResultView own = own_view(outputs);
  for (std::size_t p = 0; p < places(); ++p) {
    const std::ptrdiff_t at = std::ptrdiff_t(places_.first[p]) * result.stride;
    if (own.potential) own.potential[p] = result.potential[at];
    if (!own.field_x) continue;
    own.field_x[p] = result.field_x[at];
    own.field_y[p] = result.field_y[at];
    own.field_z[p] = result.field_z[at];
  }
  return session_.measure(outputs, own);
}

}  // namespace farsum
