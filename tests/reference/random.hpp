#pragma once
// The tests' own random numbers: xoshiro256** seeded by splitmix64 (D. Blackman, S. Vigna, ACM Trans. Math. Softw. 47, 36
// (2021)). No standard distribution is used, so every compiler makes the same charges from the same seed.
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <numbers>

namespace farsum::reference {

class Random {
 public:
  explicit Random(std::uint64_t seed) {
    for (std::uint64_t& word : state_) {
      seed += 0x9e3779b97f4a7c15u;
      std::uint64_t mixed = seed;
      mixed = (mixed ^ (mixed >> 30)) * 0xbf58476d1ce4e5b9u;
      mixed = (mixed ^ (mixed >> 27)) * 0x94d049bb133111ebu;
      word = mixed ^ (mixed >> 31);
    }
  }

  std::uint64_t bits() {
    const std::uint64_t value = rotated(state_[1] * 5, 7) * 9, shifted = state_[1] << 17;
    state_[2] ^= state_[0];
    state_[3] ^= state_[1];
    state_[1] ^= state_[2];
    state_[0] ^= state_[3];
    state_[2] ^= shifted;
    state_[3] = rotated(state_[3], 45);
    return value;
  }

  /// In [0, 1), a multiple of 2^-53.
  double uniform() { return static_cast<double>(bits() >> 11) * 0x1p-53; }
  double uniform(double low, double high) { return low + (high - low) * uniform(); }
  /// Logarithm evenly distributed.
  double log_uniform(double low, double high) { return low * std::pow(high / low, uniform()); }
  /// 0 .. count - 1; the bias of the remainder is irrelevant here.
  std::size_t index(std::size_t count) { return static_cast<std::size_t>(bits() % count); }
  /// Mean 0, variance 1 (Box and Muller 1958).
  double normal() {
    const double radius = std::sqrt(-2 * std::log(1 - uniform()));
    return radius * std::cos(2 * std::numbers::pi * uniform());
  }
  /// Evenly distributed on the unit sphere (Archimedes: z is uniform).
  std::array<double, 3> direction() {
    const double z = uniform(-1, 1), angle = 2 * std::numbers::pi * uniform(), rho = std::sqrt(1 - z * z);
    return {rho * std::cos(angle), rho * std::sin(angle), z};
  }

 private:
  static std::uint64_t rotated(std::uint64_t value, int count) { return (value << count) | (value >> (64 - count)); }
  std::uint64_t state_[4];
};

}  // namespace farsum::reference
