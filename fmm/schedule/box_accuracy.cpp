#include "fmm/schedule/box_accuracy.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

namespace farsum {
namespace {

/// Weight of the squared total charge of a box beside the sum of squares: errors of one-sign boxes add coherently, but
/// neighbours in a smooth density cancel most of that. Calibrated on uniform cubes, shells, planes and lines of one sign, t =
/// 1e-3..1e-12.
constexpr double kPotentialCoherence = 1.0, kFieldCoherence = 0.15;
/// Fraction of the nearest-neighbour field q / d^2 of a box (d = mean spacing) that its targets are sure to feel.
constexpr double kLocalShare = 0.5;
/// Fraction of the field of the far boxes that is counted on: near charges may cancel some of it.
constexpr double kFarShare = 0.4;
/// Power of the ratio of least to local field that allows for zeros of the field.
constexpr double kFieldZeros = 0.1;

/// Power of the squared radius whose mean stands for the far terms, and octaves per degree for each octave of the radius; a box
/// whose points all sit in one corner gets 0.3 octaves per degree.
constexpr double kSpreadPower = 6, kSpreadFactor = 0.45;

/// As kErrorShare, for potentials: with both signs most of them come from large boxes, whose few translations do not average
/// out.
constexpr double kPotentialErrorShare = 1.0 / 48;

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

/// Where the points of a box stand: mean place and mean square distance from it, relative to the box's centre, in sides.
struct Spread {
  double weight = 0;
  std::array<double, 3> place{};
  double variance = 0.25;  // of a uniform cube
};

/// Octaves per degree by which far terms of a box grow faster than those of a uniformly filled one: points that crowd into a
/// corner are farther from the centre. From the places of the children's points.
std::vector<float> spreads(const Octree& tree) {
  std::vector<Spread> spread(tree.boxes.size());
  std::vector<float> result(tree.boxes.size(), 0.0f);
  for (std::size_t b = tree.boxes.size(); b-- > 0;) {
    const Box& box = tree.boxes[b];
    Spread& own = spread[b];
    own.weight = box.count();
    if (box.leaf()) continue;
    double second = 0, high = 0;
    for (std::uint32_t c = box.first_child; c < box.first_child + box.children; ++c) {
      const Spread& child = spread[c];
      double square = 0;
      for (std::size_t axis = 0; axis < 3; ++axis) {
        const double at = 0.5 * child.place[axis] + (tree.boxes[c].octant >> axis & 1 ? 0.25 : -0.25);
        own.place[axis] += child.weight / own.weight * at;
        square += at * at;
      }
      square += child.variance / 4;
      second += child.weight / own.weight * square;
      high += child.weight / own.weight * std::pow(square, kSpreadPower);
    }
    own.variance = second;
    for (double p : own.place) own.variance -= p * p;
    const double radius2 = std::pow(high, 1.0 / kSpreadPower) / 0.25;  // 1 for a uniform cube
    result[b] = float(kSpreadFactor * 0.5 * std::max(0.0, std::log2(radius2)));
  }
  return result;
}

bool has_both_signs(const std::vector<Moments>& moments) {
  // A box of n charges of one sign has a sum of at least the root of its sum of squares; opposite boxes show in the signs of
  // the sums.
  bool positive = false, negative = false;
  for (const Moments& m : moments) {
    positive = positive || m.sum > 0;
    negative = negative || m.sum < 0;
  }
  return positive && negative;
}

float logarithm(double value) {
  return value > 0 ? float(std::log2(value)) : -std::numeric_limits<float>::infinity();
}

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
      for_child_relations(
          sources, near.begin(target.parent), near.end(target.parent), target, rule, [](const ListEntry&) {}, add, add);
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
  const double share = tolerance * kErrorShare, potential_share = tolerance * kPotentialErrorShare;
  BoxAccuracy accuracy;
  accuracy.base_potential = logarithm(potential_share * allowed.potential);
  accuracy.base_field = logarithm(share * allowed.field);
  const std::vector<float> source_spread = spreads(job.sources);
  accuracy.target_spread = job.same_points() ? source_spread : spreads(job.targets);
  for (std::size_t b = 0; b < moments.size(); ++b) {
    const double square = moments[b].sum * moments[b].sum;
    accuracy.sources.push_back({logarithm(std::sqrt(moments[b].squares + kPotentialCoherence * square)),
                                logarithm(std::sqrt(moments[b].squares + kFieldCoherence * square)), source_spread[b]});
  }
  const std::vector<Box>& boxes = job.targets.boxes;
  const float unlimited = std::numeric_limits<float>::infinity();
  accuracy.bearable_potential.assign(boxes.size(), unlimited);
  accuracy.bearable_field.assign(boxes.size(), unlimited);
  const bool both_signs = has_both_signs(moments);
  const auto leaf_limits = [&](std::size_t b) {
    const Box& box = boxes[b];
    double potential = kFarShare * std::abs(far[b].potential);
    double field = kFarShare * far[b].strength();
    if (job.same_points() && box.count() > 1) {
      const double q = std::sqrt(moments[b].squares / box.count());
      const double spacing = job.targets.frame.box_side(box.level) / std::cbrt(double(box.count()));
      potential = std::max(potential, kLocalShare * q / spacing);
      field = std::max(field, kLocalShare * q / (spacing * spacing));
    }
    // Where charges have both signs, potentials pass through zero: among values of size p spread evenly around it the mean of
    // 1 / max(|phi|, m)^2 is about 1 / (p m), so the norm "typical" bears sqrt(p m) only.
    if (both_signs) potential = std::sqrt(potential * allowed.least_potential);
    potential = std::max(potential, allowed.potential);
    accuracy.bearable_potential[b] = logarithm(potential_share * potential);
    // A field in space seldom comes near zero, but charges that lie nearly in a plane or on a line bring it there more often.
    if (field > allowed.least_field) field *= std::pow(allowed.least_field / field, kFieldZeros);
    field = std::max(field, allowed.field);
    if (job.with_field) accuracy.bearable_field[b] = logarithm(share * field);
  };
  job.executor.for_each(boxes.size(), 256, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t b = begin; b < end; ++b)
      if (boxes[b].leaf()) leaf_limits(b);
  });
  for (std::size_t b = boxes.size(); b-- > 1;) {
    accuracy.bearable_potential[boxes[b].parent] =
        std::min(accuracy.bearable_potential[boxes[b].parent], accuracy.bearable_potential[b]);
    accuracy.bearable_field[boxes[b].parent] = std::min(accuracy.bearable_field[boxes[b].parent], accuracy.bearable_field[b]);
  }
  return accuracy;
}

}  // namespace farsum
