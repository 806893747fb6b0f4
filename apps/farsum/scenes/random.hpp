#pragma once
// Random numbers that are the same from every compiler and processor.
//   draw(seed, stream, point, k) = mix(key + (256 point + k + 1) * golden),  key = mix(seed) + mix(stream + golden)
// with the 64-bit finaliser of SplitMix64 (G. L. Steele, D. Lea, C. H. Flood, OOPSLA 2014). Each point has its own run of 256
// draws, so that a point never depends on how many draws another one took. The transformations use +, -, *, / and sqrt only
// (exactly rounded by IEEE 754); the sources are compiled without contraction to fused multiply-add.
#include <array>
#include <cstdint>

namespace farsum::scenes {

/// The draws of one point.
class PointRandom {
 public:
  PointRandom(std::uint64_t seed, std::uint64_t stream, std::uint64_t point);

  std::uint64_t bits();               ///< 64 random bits
  double uniform();                   ///< in (0, 1), multiples of 2^-53 plus 2^-54
  double symmetric();                 ///< in (-1, 1)
  double normal();                    ///< mean 0, variance 1, cut at 4 standard deviations (polar method of G. Marsaglia, 1962)
  std::array<double, 3> in_ball();    ///< uniform in the unit ball
  std::array<double, 3> on_sphere();  ///< uniform on the unit sphere

 private:
  double full_normal();
  std::uint64_t counter_;
  double spare_ = 0;
  bool has_spare_ = false;
};

/// Natural logarithm of x > 0 by the area-tangent series: same bits everywhere, relative error below 1e-15 away from x = 1.
double portable_log(double x);

}  // namespace farsum::scenes
