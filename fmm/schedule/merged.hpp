#pragma once
// Charges at equal places as one charge: their mutual pairs fall away, and k equal points cost O(k).
#include <vector>

#include "fmm/schedule/session.hpp"

namespace farsum {

struct Session::Merged {
 public:
  Merged(DistinctPlaces places, const PointsView& positions, const ChargesView& charges, const Options& options);

  std::size_t places() const noexcept { return places_.first.size(); }
  void update_charges(const ChargesView& charges);
  /// Results of each place, given to every charge at it.
  void evaluate(Output outputs, const ResultView& result);
  ErrorMeasure measure(Output outputs, const ResultView& result);
  const Report& report() const noexcept { return session_.report(); }

 private:
  ResultView own_view(Output outputs);
  void sum_charges(const ChargesView& charges);

  DistinctPlaces places_;
  std::vector<double> x_, y_, z_, q_, values_;
  Session session_;
};

}  // namespace farsum
