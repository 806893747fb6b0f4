#pragma once
// The vector kernels of one CPU target, as plain functions on raw arrays. A kernel allocates nothing, throws nothing, and knows
// no tree and no task. Every target offers the same table; dispatch.hpp hands out the one for a target.
#include <cstddef>

#include "fmm/base/padding.hpp"

namespace farsum::kernels {

/// Arguments of the near-field sums. Adds to potential[i] and field[i], i < n_targets:
///   sum_j q_j / r_ij,   sum_j q_j (t_i - s_j) / r_ij^3.
/// Sources are padded with charge 0 to a multiple of kSourcePad. If self >= 0 (even), target i is source self + i and is left
/// out of its own sum. Any other pair at zero distance makes nearest_squared[i] = 0 (see mask_zero).
struct PairSums {
  const double *sx, *sy, *sz, *sq;
  std::size_t n_sources;
  const double *tx, *ty, *tz;
  std::size_t n_targets;
  std::ptrdiff_t self;
  double *potential, *field_x, *field_y, *field_z;
  double* nearest_squared;  ///< min(old value, smallest r_ij^2), the self pair left out
};

/// Reciprocal roots: `fast` is good to 6e-13, `full` to rounding.
enum class RootAccuracy { fast, full };

/// Sums for error measurement: terms rounded once or twice each, added with compensation. Per target i:
///   potential[i], field[i] as PairSums with zero distances left out (also of nearest_squared); potential_scale[i] = sum |q_j|
///   / r, field_scale[i] = sum |q_j| / r^2.
struct ExactSums {
  PairSums sums;
  double *potential_scale, *field_scale;
};

/// Harmonics of one box, all degrees n <= order, layout of expansion/indexing.hpp.
/// Points are relative to the expansion centre in units of the box, padded with charge 0 to whole vectors (see
/// project/evaluate).
template <class Real>
struct PointBlock {
  const Real *x, *y, *z, *q;
  std::size_t count;  ///< padded to a multiple of kRealPad<Real>
};
template <class Real>
inline constexpr std::size_t kRealPad = 64 / sizeof(Real);

/// One translation for a batch of boxes that share the offset (expansion/translation.hpp builds it):
/// rotate the offset to the z axis, shift, rotate back; adds to the targets.
template <class Real>
struct Translation {
  int order;                         ///< degree of input and output
  const Real *cos_m, *sin_m;         ///< cos(m alpha), sin(m alpha), m = 0..order
  const Real *turn, *turn_back;      ///< blocks of the rotation about y, per degree: cosine part, sine part (row blocks)
  const Real* shift;                 ///< per m: (order - m + 1)^2 matrix in row blocks
  const Real *scale_in, *scale_out;  ///< per degree
  /// If not 0: the rounding errors of adding to the first 64 bytes of a target (its lowest degrees, which collect from hundreds
  /// of boxes) are added to the 64 bytes at this place behind its start.
  std::size_t carry = 0;
};

/// Factors of the harmonic recurrences: row m at table + m * stride holds d_m, unused, then a_nm, b_nm for n = m + 1, m + 2,
/// ...
template <class Real>
struct Recurrence {
  const Real* table;
  std::size_t stride;
};

/// Reals of scratch that every expansion kernel needs at most for an order; scratch is aligned to 64 bytes.
constexpr std::size_t expansion_scratch(int order) noexcept {
  // three work arrays of lanes (two vectors of at most 16 reals), rounded up to whole vectors
  return 3 * (std::size_t(order + 1) * std::size_t(order + 2) + 16) * 32;
}

template <class Real>
struct ExpansionKernels {
  /// rows[i] -> targets[i] += T rows[i], i < count; rows of padded length (indexing.hpp).
  void (*translate)(const Translation<Real>& translation, const Real* const* rows, Real* const* targets, std::size_t count,
                    Real* scratch);
  /// Adds sum_j q_j H_nk(x_j) to coefficients: H regular (P2M) or irregular (P2L).
  void (*project)(const PointBlock<Real>& points, int order, bool irregular, const Recurrence<Real>& recurrence,
                  Real* coefficients, Real* scratch);
  /// values[c][i] = sum_nk rows[c][nk] H_nk(x_i), c < n_rows, n_rows 1 or 4: L2P (regular) and M2P (irregular).
  void (*evaluate)(const PointBlock<Real>& points, int order, bool irregular, const Recurrence<Real>& recurrence,
                   const Real* const* rows, int n_rows, Real* const* values);
};

struct KernelTable {
  const char* name;
  void (*pair_sums)(const PairSums& arguments, RootAccuracy accuracy, bool mask_zero, bool with_field);
  void (*exact_sums)(const ExactSums& arguments);
  ExpansionKernels<float> single_precision;
  ExpansionKernels<double> double_precision;
};

template <class Real>
const ExpansionKernels<Real>& expansion_kernels(const KernelTable& table) {
  if constexpr (sizeof(Real) == sizeof(float))
    return table.single_precision;
  else
    return table.double_precision;
}

}  // namespace farsum::kernels
