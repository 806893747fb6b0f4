#pragma once
// A first look at the field: exact sums at a few targets tell how large potentials and fields are, and with that how much
// absolute error the tolerance allows. The choice of places is a pure function of the data.
#include "fmm/schedule/evaluation_job.hpp"

namespace farsum {

/// Absolute errors that keep both norms of the contract (rms <= t, typical <= 3 t) if every target has them, for t = 1; scaled
/// units.
struct AllowedError {
  double potential = 0, field = 0;
  /// The smallest sizes that the norm "typical" divides an error by: max(median |f|, f0).
  double least_potential = 0, least_field = 0;
};

/// Cost: kSurveyTargets x sources pairs.
AllowedError survey(const EvaluationJob& job, double charge_rms);

}  // namespace farsum
