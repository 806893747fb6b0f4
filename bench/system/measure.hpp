#pragma once
// One row of the system benchmark: a whole solve, repeated, with its cost in pairs of the direct sum.
#include <optional>
#include <string>

#include "fmm/options.hpp"
#include "fmm/report.hpp"

namespace farsum::bench {

struct Case {
  std::string input;
  bool both_signs = false;
  std::size_t count = 0;
  double tolerance = 1e-6;
  int threads = 1;
  Method method = Method::automatic;
};

struct Row {
  Case settings;
  std::optional<std::string> failure;  ///< error word; the rest is then as far as the solve came
  Report report;                       ///< of the run with the median solve time
  double fastest = 0, slowest = 0;     ///< solve seconds over the repeats
  double pair_rate = 0;                ///< R: pairs/s of the own direct kernel on one core, measured around this row
  double yardstick_rate = 0;           ///< the same of the plain loop; 0 without AVX-512

  /// w = seconds x threads x R / N: work a charge in pairs of the direct sum.
  double work() const;
  double charges_per_second() const;
};

/// Solves `settings` `repeats` times, potential and field, a new solver each time; the error is measured each time, outside the
/// clock.
Row run_case(const Case& settings, int repeats);

}  // namespace farsum::bench
