#include "tests/reference/direct_sum.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <thread>

namespace farsum::reference {
namespace {

constexpr std::size_t kNone = std::numeric_limits<std::size_t>::max();

/// Sum that carries the rounding errors of its additions along.
class CompensatedSum {
 public:
  void add(long double term) {
    const long double next = sum_ + term;
    lost_ += std::fabs(sum_) >= std::fabs(term) ? (sum_ - next) + term : (term - next) + sum_;
    sum_ = next;
  }
  long double value() const { return sum_ + lost_; }

 private:
  long double sum_ = 0, lost_ = 0;
};

Exact sum_at(const Charges& sources, const Point& target, std::size_t self) {
  CompensatedSum potential, field[3];
  Exact exact;
  long double nearest2 = std::numeric_limits<long double>::infinity();
  for (std::size_t j = 0; j < sources.size(); ++j) {
    if (j == self) continue;
    const long double dx = static_cast<long double>(target[0]) - sources.x[j];
    const long double dy = static_cast<long double>(target[1]) - sources.y[j];
    const long double dz = static_cast<long double>(target[2]) - sources.z[j];
    const long double r2 = dx * dx + dy * dy + dz * dz;
    if (r2 == 0) {
      ++exact.coincident;
      continue;
    }
    nearest2 = std::min(nearest2, r2);
    const long double inverse = 1 / std::sqrt(r2), term = sources.q[j] * inverse, scaled = term / r2;
    potential.add(term);
    field[0].add(scaled * dx);
    field[1].add(scaled * dy);
    field[2].add(scaled * dz);
    exact.potential_magnitude += std::fabs(term);
    exact.field_magnitude += std::fabs(term * inverse);
  }
  exact.potential = potential.value();
  for (std::size_t axis = 0; axis < 3; ++axis) exact.field[axis] = field[axis].value();
  exact.nearest = static_cast<double>(std::sqrt(nearest2));
  return exact;
}

/// Fills results[i] = rule(i) with all processors.
template <typename Rule>
std::vector<Exact> parallel_fill(std::size_t count, Rule&& rule) {
  std::vector<Exact> results(count);
  const std::size_t workers = std::clamp<std::size_t>(std::thread::hardware_concurrency(), 1, 16);
  std::vector<std::thread> threads;
  for (std::size_t worker = 0; worker < workers; ++worker) {
    threads.emplace_back([&, worker] {
      for (std::size_t i = worker; i < count; i += workers) results[i] = rule(i);
    });
  }
  for (std::thread& thread : threads) thread.join();
  return results;
}

}  // namespace

std::vector<Exact> direct_sum(const Charges& charges, const std::vector<std::size_t>& targets) {
  return parallel_fill(targets.size(), [&](std::size_t i) { return sum_at(charges, charges.place(targets[i]), targets[i]); });
}

std::vector<Exact> direct_sum(const Charges& charges) {
  return direct_sum(charges, all_indices(charges.size()));
}

std::vector<Exact> direct_sum_at(const Charges& sources, const Charges& targets) {
  return parallel_fill(targets.size(), [&](std::size_t i) { return sum_at(sources, targets.place(i), kNone); });
}

std::vector<std::size_t> all_indices(std::size_t count) {
  std::vector<std::size_t> indices(count);
  std::iota(indices.begin(), indices.end(), std::size_t{0});
  return indices;
}

}  // namespace farsum::reference
