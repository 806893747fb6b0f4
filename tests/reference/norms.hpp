#pragma once
// The error norms of the accuracy contract, written independently of the engine. With e_i = |f_i - f_i_exact| over the targets,
// f0 = median of q_rms / d_i^k (d_i distance to the nearest other charge; k = 1 potential, 2 field), all means and medians
// weighted:
//   scale   = max(sqrt(mean f_i^2), f0)
//   rms     = sqrt(mean e_i^2) / scale
//   typical = sqrt(mean (e_i / max(|f_i|, median |f|, f0))^2)
//   worst   = max e_i / scale
#include <cstddef>
#include <vector>

#include "tests/reference/direct_sum.hpp"

namespace farsum::reference {

struct Norms {
  double rms = 0, typical = 0, worst = 0;
  double scale = 0;  ///< max(rms f, f0)
  /// 2^-53 times each norm of S_i, the sum of absolute terms, in place of e_i: unit of rounding in the sums themselves.
  double rounding = 0, typical_rounding = 0, worst_rounding = 0;
};

struct Measured {
  Norms potential, field;
};

/// Targets at which the exact values are known; `weight` is the number of charges that each stands for (empty: 1 each).
struct Sample {
  std::vector<std::size_t> targets;
  std::vector<double> weight;
  std::vector<Exact> exact;
};

/// Every charge.
Sample whole(const Charges& charges);
/// `special` charges with the smallest distances and `special` with the largest fields (both from all-target estimates in
/// double), each standing for itself, and `strided` of the rest that stand for all of the rest.
Sample chosen(const Charges& charges, std::size_t special, std::size_t strided);

double charge_rms(const Charges& charges);

/// Norms of a result at the charges; result.size() is the number of charges.
Measured measure(const Charges& charges, const Sample& sample, const Result& result);
/// Norms of a result at other places; result i belongs to exact[i].
Measured measure_at(const Charges& sources, const std::vector<Exact>& exact, const Result& result);

}  // namespace farsum::reference
