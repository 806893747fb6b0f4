#pragma once
// Reference sums in extended precision, written independently of the engine:
//   phi_i = sum_{j != i} q_j / |x_i - x_j|,   E_i = sum_{j != i} q_j (x_i - x_j)/|x_i - x_j|^3.
// Each sum is compensated (A. Neumaier, Z. angew. Math. Mech. 54, 39 (1974)) in x87 long double: relative to the sum of
// absolute terms the error is a few 2^-64, whatever the number of charges.
#include <array>
#include <cstddef>
#include <vector>

#include "tests/reference/charges.hpp"

namespace farsum::reference {

/// Exact values at one target and what the norms need to know about it.
struct Exact {
  long double potential = 0;
  std::array<long double, 3> field{};
  long double potential_magnitude = 0;  ///< sum |q_j| / r_ij
  long double field_magnitude = 0;      ///< sum |q_j| / r_ij^2
  double nearest = 0;                   ///< distance to the nearest other place that holds a charge; infinite if there is none
  std::size_t coincident = 0;           ///< other charges at exactly this place; left out of the sums
};

/// At the charges with these indices; a charge does not act on itself.
std::vector<Exact> direct_sum(const Charges& charges, const std::vector<std::size_t>& targets);
/// At all charges.
std::vector<Exact> direct_sum(const Charges& charges);
/// At other places.
std::vector<Exact> direct_sum_at(const Charges& sources, const Charges& targets);

/// 0 .. count - 1.
std::vector<std::size_t> all_indices(std::size_t count);

}  // namespace farsum::reference
