#pragma once
// One call of the engine as the tests need it: result, report and, if it failed, the error.
#include <optional>
#include <string>

#include "fmm/error.hpp"
#include "fmm/solver.hpp"
#include "tests/reference/charges.hpp"

namespace farsum::reference {

constexpr Output kBoth = Output::potential | Output::field;

struct Outcome {
  Result result;
  Report report;
  std::optional<ErrorCode> code;  ///< empty: no error
  std::string message;

  bool good() const { return !code.has_value(); }
};

/// Tolerance and method; everything else as by default.
inline Options with(double tolerance, Method method = Method::tree) {
  Options options;
  options.tolerance = tolerance;
  options.method = method;
  return options;
}

/// A fresh solver, set and evaluated once at the charges.
Outcome solve(const Charges& charges, const Options& options, Output outputs = kBoth);
/// A fresh solver, evaluated once at other places.
Outcome solve_at(const Charges& sources, const Charges& targets, const Options& options, Output outputs = kBoth);

}  // namespace farsum::reference
