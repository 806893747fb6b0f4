#pragma once
// Gathers Contents over slabs of rows. Sums are compensated (A. Neumaier, Z. Angew. Math. Mech. 54, 39 (1974)).
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>

#include "io/file_summary.hpp"
#include "io/units.hpp"

namespace farsum::io {

class CompensatedSum {
 public:
  void add(double value) noexcept {
    const double next = sum_ + value;
    rest_ += std::abs(sum_) >= std::abs(value) ? (sum_ - next) + value : (value - next) + sum_;
    sum_ = next;
  }
  double value() const noexcept { return sum_ + rest_; }

 private:
  double sum_ = 0, rest_ = 0;
};

/// Rows of one or several species; result() may be asked at any time.
class ContentsSums {
 public:
  void add_place(double x, double y, double z) noexcept {
    const std::array<double, 3> place{x, y, z};
    for (std::size_t axis = 0; axis < 3; ++axis) {
      lower_[axis] = rows_ ? std::min(lower_[axis], place[axis]) : place[axis];
      upper_[axis] = rows_ ? std::max(upper_[axis], place[axis]) : place[axis];
    }
    ++rows_;
  }
  void add_charge(double charge) noexcept {
    charge_.add(charge);
    size_.add(std::abs(charge));
  }
  /// u = p / (m c), weighted by |charge|.
  void add_motion(double ux, double uy, double uz, double charge) noexcept {
    const double weight = std::abs(charge), square = ux * ux + uy * uy + uz * uz;
    const double speed = weight * kSpeedOfLight / std::sqrt(1 + square);
    velocity_[0].add(speed * ux);
    velocity_[1].add(speed * uy);
    velocity_[2].add(speed * uz);
    beta_gamma_.add(weight * std::sqrt(square));
    moving_.add(weight);
  }
  Contents result() const noexcept {
    Contents contents;
    contents.total_charge = charge_.value();
    contents.total_absolute_charge = size_.value();
    contents.lower = lower_;
    contents.upper = upper_;
    const double weight = moving_.value();
    contents.has_motion = weight > 0;
    if (!contents.has_motion) return contents;
    for (std::size_t axis = 0; axis < 3; ++axis) contents.mean_velocity[axis] = velocity_[axis].value() / weight;
    contents.mean_beta_gamma = beta_gamma_.value() / weight;
    return contents;
  }

 private:
  std::size_t rows_ = 0;
  std::array<double, 3> lower_{}, upper_{};
  CompensatedSum charge_, size_, beta_gamma_, moving_;
  std::array<CompensatedSum, 3> velocity_;
};

}  // namespace farsum::io
