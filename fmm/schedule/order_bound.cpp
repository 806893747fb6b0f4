#include "fmm/schedule/order_bound.hpp"

#include <algorithm>
#include <array>
#include <cmath>

namespace farsum {
namespace {

/// Growth of the truncation error for each degree that is left out, and the part of the squared tolerance that may be lost to
/// capping.
constexpr double kGrowth = 1.8, kCappedPart = 0.05;
/// Expansions of unequal boxes are judged as the nearest far pair of boxes of one level.
constexpr int kNearestSquared = 4;

/// Of many boxes one in so many is asked; odd, so that no octant is preferred.
constexpr std::size_t kAllBoxes = 10000, kSampleStride = 5;

/// By wanted order: targets concerned, and the same weighted with the square of what they bear.
struct Demand {
  std::array<double, kMaxOrder + 1> targets{}, squares{}, pairs{};

  void add(int order, double count, double weight) {
    targets[std::size_t(order)] += count;
    squares[std::size_t(order)] += count * weight;
  }
  void join(const Demand& other) {
    for (std::size_t p = 0; p <= kMaxOrder; ++p) {
      targets[p] += other.targets[p];
      squares[p] += other.squares[p];
      pairs[p] += other.pairs[p];
    }
  }
  /// Squared error, in units of the squared tolerance, that a cap adds to the worse of the two norms.
  double capped(int cap, double n) const {
    double by_target = 0, by_square = 0;
    for (int p = cap + 1; p <= kMaxOrder; ++p) {
      const double excess = std::pow(kGrowth, 2 * (p - cap)) * kErrorShare * kErrorShare;
      by_target += targets[std::size_t(p)] * excess;
      by_square += squares[std::size_t(p)] * excess;
    }
    return std::max(by_target, by_square) / n;
  }
};

class Collector {
 public:
  Collector(const EvaluationJob& job, const NearLists& near, const DirectRule& rule, const BoxAccuracy& accuracy,
            const OrderChoice& orders)
      : job_(job), near_(near), rule_(rule), accuracy_(accuracy), orders_(orders) {}

  void add_box(Demand& demand, std::size_t b) const {
    const std::vector<Box>& sources = job_.sources.boxes;
    const Box& target = job_.targets.boxes[b];
    const double log_side = std::log2(job_.targets.frame.box_side(target.level));
    const double weight = job_.with_field ? std::exp2(2.0 * (accuracy_.bearable_field[b] - accuracy_.base_field))
                                          : std::exp2(2.0 * (accuracy_.bearable_potential[b] - accuracy_.base_potential));
    const auto consider = [&](std::uint32_t s, int squared, double side) {
      const int order = orders_.order(squared, side, accuracy_.demand(b, s));
      demand.add(order, target.count(), weight);
      return std::size_t(order);
    };
    for_child_relations(
        job_.sources, near_.begin(target.parent), near_.end(target.parent), target, rule_, [](const ListEntry&) {},
        [&](std::uint32_t s, std::uint32_t) {
          demand.pairs[consider(s, DirectRule::offset(target, sources[s]).squared(), log_side)] += 1;
        },
        [&](std::uint32_t s, std::uint32_t) { consider(s, kNearestSquared, log_side); });
    if (!target.leaf()) return;
    for_leaf_relations(
        job_.sources, near_.begin(b), near_.end(b), target, rule_, [](std::uint32_t, std::uint32_t) {},
        [&](std::uint32_t s, std::uint32_t) {
          consider(s, kNearestSquared, std::log2(job_.sources.frame.box_side(sources[s].level)));
        });
  }

 private:
  const EvaluationJob& job_;
  const NearLists& near_;
  const DirectRule& rule_;
  const BoxAccuracy& accuracy_;
  const OrderChoice& orders_;
};

}  // namespace

OrderSurvey order_bound(const EvaluationJob& job, const NearLists& near, const DirectRule& rule, const BoxAccuracy& accuracy,
                        const OrderChoice& orders) {
  constexpr std::size_t kGrain = 512;
  const std::size_t boxes = job.targets.boxes.size();
  const std::size_t stride = boxes > kAllBoxes ? kSampleStride : 1;
  std::vector<Demand> parts((boxes + kGrain - 1) / kGrain);
  const Collector collector(job, near, rule, accuracy, orders);
  job.executor.for_each(boxes, kGrain, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t b = std::max<std::size_t>(begin, 1); b < end; b += stride) collector.add_box(parts[begin / kGrain], b);
  });
  Demand demand;
  for (const Demand& part : parts) demand.join(part);
  OrderSurvey survey;
  survey.order = kMaxOrder;
  while (survey.order > kMinOrder && demand.capped(survey.order - 1, double(job.targets.count) / double(stride)) <= kCappedPart)
    --survey.order;
  for (int p = 0; p <= kMaxOrder; ++p) {
    survey.pairs += demand.pairs[std::size_t(p)];
    survey.mean_order += demand.pairs[std::size_t(p)] * std::min(p, survey.order);
  }
  if (survey.pairs > 0) survey.mean_order /= survey.pairs;
  return survey;
}

}  // namespace farsum
