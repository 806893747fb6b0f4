#include "apps/farsum/scenes/random.hpp"

#include <cmath>

namespace farsum::scenes {
namespace {

constexpr std::uint64_t kGolden = 0x9E3779B97F4A7C15ULL;
constexpr double kTwoToMinus53 = 0x1p-53;
constexpr double kNormalCut = 4.0;

std::uint64_t mix(std::uint64_t v) {
  v = (v ^ (v >> 30)) * 0xBF58476D1CE4E5B9ULL;
  v = (v ^ (v >> 27)) * 0x94D049BB133111EBULL;
  return v ^ (v >> 31);
}

}  // namespace

PointRandom::PointRandom(std::uint64_t seed, std::uint64_t stream, std::uint64_t point)
    : counter_(mix(seed) + mix(stream + kGolden) + point * 256 * kGolden) {}

std::uint64_t PointRandom::bits() {
  counter_ += kGolden;
  return mix(counter_);
}

double PointRandom::uniform() {
  return (double(bits() >> 11) + 0.5) * kTwoToMinus53;
}

double PointRandom::symmetric() {
  return 2.0 * uniform() - 1.0;
}

double PointRandom::full_normal() {
  if (has_spare_) {
    has_spare_ = false;
    return spare_;
  }
  double u, v, s;
  do {
    u = symmetric();
    v = symmetric();
    s = u * u + v * v;
  } while (s >= 1.0 || s == 0.0);
  const double f = std::sqrt(-2.0 * portable_log(s) / s);
  spare_ = v * f;
  has_spare_ = true;
  return u * f;
}

double PointRandom::normal() {
  double g;
  do g = full_normal();
  while (g > kNormalCut || g < -kNormalCut);
  return g;
}

std::array<double, 3> PointRandom::in_ball() {
  double x, y, z;
  do {
    x = symmetric();
    y = symmetric();
    z = symmetric();
  } while (x * x + y * y + z * z >= 1.0);
  return {x, y, z};
}

std::array<double, 3> PointRandom::on_sphere() {
  // A point of the ball scaled out to the sphere; the innermost thousandth of the radius is drawn again to keep full precision.
  double x, y, z, square;
  do {
    const auto p = in_ball();
    x = p[0];
    y = p[1];
    z = p[2];
    square = x * x + y * y + z * z;
  } while (square < 1e-6);
  const double scale = 1.0 / std::sqrt(square);
  return {x * scale, y * scale, z * scale};
}

double portable_log(double x) {
  // log(m 2^e) = e log 2 + 2 artanh(s), s = (m - 1)/(m + 1), with m in [sqrt(1/2), sqrt(2)), |s| < 0.1716.
  int exponent = 0;
  double m = std::frexp(x, &exponent);  // exact
  if (m < 0.70710678118654752) {
    m *= 2.0;
    --exponent;
  }
  const double s = (m - 1.0) / (m + 1.0);
  const double square = s * s;
  double sum = 0.0;
  for (int k = 23; k >= 1; k -= 2) sum = sum * square + 1.0 / double(k);
  return double(exponent) * 0.69314718055994531 + 2.0 * s * sum;
}

}  // namespace farsum::scenes
