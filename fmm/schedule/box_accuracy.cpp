#include "fmm/schedule/box_accuracy.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

namespace farsum {
namespace {

/// Weight of the squared total charge of a box beside the sum of squares: errors of one-sign boxes add coherently, but neighbours in
/// a smooth density cancel most of that. Calibrated on uniform cubes, shells, planes and lines of one sign, t = 1e-3..1e-12.
constexpr double kCoherence = 0.1;
/// Fraction of the nearest-neighbour field q / d^2 of a box (d = mean spacing) that its targets are sure to feel.
constexpr double kLocalShare = 0.5;
/// Fraction of the field of the far boxes that is counted on: near charges may cancel some of it.
constexpr double kFarShare = 0.4;

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

/// Potential and field of the total charges of far boxes at the centre of a target box.
struct FarEstimate {
  double potential = 0;
  std::array<double, 3> field{};
  double strength() const { return std::sqrt(field[0] * field[0] + field[1] * field[1] + field[2] * field[2]); }
};

std::array<double, 3> centre(const Box& box, const Frame& frame) {
  const double side = frame.box_side(box.level);
  return {(double(box.place[0]) + 0.5) * side, (double(box.place[1]) + 0.5) * side, (double(box.place[2]) + 0.5) * side};
}

/// By target box; leaves take over what their parent has, which saves most of the pairs and hardly changes the estimate.
std::vector<FarEstimate> far_estimates(const EvaluationJob& job, const NearLists& near, const DirectRule& rule,
                                       const std::vector<Moments>& moments) {
  const Octree &targets = job.targets, &sources = job.sources;
  std::vector<FarEstimate> estimates(targets.boxes.size());
  const auto estimate = [&](std::size_t b) {
    const Box& target = targets.boxes[b];
    FarEstimate sum = estimates[target.parent];
    const std::array<double, 3> at = centre(target, targets.frame);
    const auto add = [&](std::uint32_t s, std::uint32_t) {
      const std::array<double, 3> from = centre(sources.boxes[s], sources.frame);
      const double d[3] = {at[0] - from[0], at[1] - from[1], at[2] - from[2]};
      const double r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2], w = moments[s].sum / std::sqrt(r2);
      sum.potential += w;
      for (std::size_t axis = 0; axis < 3; ++axis) sum.field[axis] += w * d[axis] / r2;
    };
    if (!target.leaf())
      for_child_relations(sources, near.begin(target.parent), near.end(target.parent), target, rule, [](const ListEntry&) {}, add, add);
    estimates[b] = sum;
  };
  for (std::size_t level = 1; level + 1 < targets.level_begin.size(); ++level) {
    const std::size_t first = targets.level_begin[level], count = targets.level_begin[level + 1] - first;
    job.executor.for_each(count, 256, [&](std::size_t begin, std::size_t end, int) {
      for (std::size_t b = first + begin; b < first + end; ++b) estimate(b);
    });
  }
  return estimates;
}

}  // namespace

BoxAccuracy box_accuracy(const EvaluationJob& job, const NearLists& near, const DirectRule& rule, const AllowedError& allowed,
                         double tolerance) {
  const std::vector<Moments> moments = charge_moments(job);
  const std::vector<FarEstimate> far = far_estimates(job, near, rule, moments);
  const double share = tolerance * kErrorShare;
  BoxAccuracy accuracy;
  accuracy.base_potential = logarithm(share * allowed.potential);
  accuracy.base_field = logarithm(share * allowed.field);
  accuracy.strength.resize(moments.size());
  for (std::size_t b = 0; b < moments.size(); ++b)
    accuracy.strength[b] = logarithm(std::sqrt(moments[b].squares + kCoherence * moments[b].sum * moments[b].sum));

  const std::vector<Box>& boxes = job.targets.boxes;
  const float unlimited = std::numeric_limits<float>::infinity();
  accuracy.bearable_potential.assign(boxes.size(), unlimited);
  accuracy.bearable_field.assign(boxes.size(), unlimited);
  const auto leaf_limits = [&](std::size_t b) {
    const Box& box = boxes[b];
    double potential = std::max(allowed.potential, kFarShare * std::abs(far[b].potential));
    double field = std::max(allowed.field, kFarShare * far[b].strength());
    if (job.same_points() && box.count() > 1) {
      const double q = std::sqrt(moments[b].squares / box.count());
      const double spacing = job.targets.frame.box_side(box.level) / std::cbrt(double(box.count()));
      potential = std::max(potential, kLocalShare * q / spacing);
      field = std::max(field, kLocalShare * q / (spacing * spacing));
    }
    accuracy.bearable_potential[b] = logarithm(share * potential);
    if (job.with_field) accuracy.bearable_field[b] = logarithm(share * field);
  };
  job.executor.for_each(boxes.size(), 256, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t b = begin; b < end; ++b)
      if (boxes[b].leaf()) leaf_limits(b);
  });
  for (std::size_t b = boxes.size(); b-- > 1;) {
    accuracy.bearable_potential[boxes[b].parent] = std::min(accuracy.bearable_potential[boxes[b].parent], accuracy.bearable_potential[b]);
    accuracy.bearable_field[boxes[b].parent] = std::min(accuracy.bearable_field[boxes[b].parent], accuracy.bearable_field[b]);
  }
  return accuracy;
}

}  // namespace farsum
