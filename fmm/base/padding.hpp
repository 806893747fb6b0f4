#pragma once
// How arrays that vector kernels read are padded.
#include <cstddef>

namespace farsum {

/// Doubles per block to which source arrays are padded: the widest vector of any target.
inline constexpr std::size_t kSourcePad = 8;
/// Distance of padding sources (charge 0) from the corner of the scaled points in each coordinate: far outside their extent of
/// one, small enough for any power of r to stay finite.
inline constexpr double kPadDistance = 1e3;

/// n rounded up to a multiple of `block`.
constexpr std::size_t round_up(std::size_t n, std::size_t block) noexcept {
  return (n + block - 1) / block * block;
}

}  // namespace farsum
