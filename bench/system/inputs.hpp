#pragma once
// Charges for the system benchmark: six shapes, one sign or both, the same numbers from every compiler for a seed.
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace farsum::bench {

struct Charges {
  std::vector<double> x, y, z, q;
};

/// cube      uniform in the unit cube
/// shell     uniform on the unit sphere
/// line      uniform on a diagonal of the unit cube (no coordinate is constant)
/// plane     uniform on a tilted square
/// bunch     Gaussian core, 1:1:10, with 5 % of the charges in a halo four times as wide
/// droplets  200 droplets of radius 1e-4 to 1e-2 in the unit cube, equal numbers of charges in each
const std::vector<std::string>& input_names();

/// `count` charges of size 1, all positive or alternating in sign. `name` must be one of input_names().
Charges make_input(std::string_view name, std::size_t count, bool both_signs, std::uint64_t seed);

}  // namespace farsum::bench
