#include "fmm/schedule/box_accuracy.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace farsum {
namespace {

/// Weight of the squared total charge of a box beside the sum of squares: errors of one-sign boxes add coherently, but neighbours in
/// a smooth density cancel most of that. Calibrated on uniform cubes and shells of one sign, N = 1e4..1e6, t = 1e-3..1e-12.
constexpr double kCoherence = 0.05;
/// Translations whose errors add up at one target (189 a level on several levels, as a square root), and what rounding the order up
/// leaves unused on average.
constexpr double kSharedErrors = 1.0 / 12;
/// Fraction of the nearest-neighbour field q / d^2 of a box (d = mean spacing) that its targets are sure to feel.
constexpr double kLocalShare = 0.5;

struct Moments {
  double sum = 0, squares = 0;
};

std::vector<Moments> charge_moments(const EvaluationJob& job) {
  const std::vector<Box>& boxes = job.sources.boxes;
  std::vector<Moments> moments(boxes.size());
  job.executor.for_each(boxes.size(), 256, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t b = begin; b < end; ++b)
      if (boxes[b].leaf())
        for (std::uint32_t k = boxes[b].begin; k < boxes[b].end; ++k) {
          moments[b].sum += job.charges[k];
          moments[b].squares += job.charges[k] * job.charges[k];
        }
  });
  for (std::size_t b = boxes.size(); b-- > 1;) {
    moments[boxes[b].parent].sum += moments[b].sum;
    moments[boxes[b].parent].squares += moments[b].squares;
  }
  return moments;
}

float logarithm(double value) { return value > 0 ? float(std::log2(value)) : -std::numeric_limits<float>::infinity(); }

}  // namespace

BoxAccuracy box_accuracy(const EvaluationJob& job, const AllowedError& allowed, double tolerance) {
  const std::vector<Moments> moments = charge_moments(job);
  BoxAccuracy accuracy;
  accuracy.strength.resize(moments.size());
  for (std::size_t b = 0; b < moments.size(); ++b)
    accuracy.strength[b] = logarithm(std::sqrt(moments[b].squares + kCoherence * moments[b].sum * moments[b].sum));

  const std::vector<Box>& boxes = job.targets.boxes;
  const float unlimited = std::numeric_limits<float>::infinity();
  accuracy.bearable_potential.assign(boxes.size(), unlimited);
  accuracy.bearable_field.assign(boxes.size(), unlimited);
  const double share = tolerance * kSharedErrors;
  for (std::size_t b = boxes.size(); b-- > 0;) {
    const Box& box = boxes[b];
    if (box.leaf()) {
      double local_potential = 0, local_field = 0;
      if (job.same_points() && box.count() > 1) {
        const double q = std::sqrt(moments[b].squares / box.count());
        const double spacing = job.targets.frame.box_side(box.level) / std::cbrt(double(box.count()));
        local_potential = kLocalShare * q / spacing;
        local_field = local_potential / spacing;
      }
      accuracy.bearable_potential[b] = logarithm(share * std::max(allowed.potential, local_potential));
      accuracy.bearable_field[b] = job.with_field ? logarithm(share * std::max(allowed.field, local_field)) : unlimited;
    }
    if (b == 0) break;
    accuracy.bearable_potential[box.parent] = std::min(accuracy.bearable_potential[box.parent], accuracy.bearable_potential[b]);
    accuracy.bearable_field[box.parent] = std::min(accuracy.bearable_field[box.parent], accuracy.bearable_field[b]);
  }
  return accuracy;
}

}  // namespace farsum
