#pragma once
// How large the error of a truncated multipole-to-local translation is on average: the model behind every choice of an order.
#include <vector>

namespace farsum::coulomb {

struct TruncationError {
  double potential, field;   ///< RMS over targets, for sources with sum q^2 = 1; lengths in box sides
};

/// For all orders 0..max_order: the RMS error at random places of a cube of side one, of the potential and field of random charges
/// in another such cube at centre distance sqrt(squared_distance) >= 2, when both expansions keep all degrees <= order p:
///   potential^2 = sum over (n, l) with n > p or l > p of C(2n + 2l, 2n) / ((2n+1)(2l+1)) <s^2n> <t^2l> / d^(2n+2l+2)
/// where <s^2n>, <t^2l> are the means of even powers of the distance from the centre; for the field <t^2l> becomes l (2l+1) <t^(2l-2)>.
/// The orientation of the cubes is averaged over.
std::vector<TruncationError> truncation_errors(int max_order, int squared_distance);

}  // namespace farsum::coulomb
