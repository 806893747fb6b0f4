#include "fmm/schedule/memory_plan.hpp"

#include <algorithm>
#include <string>

#include "fmm/error.hpp"
#include "fmm/expansion/indexing.hpp"
#include "fmm/schedule/tree_evaluation.hpp"
#include "fmm/traversal/interactions.hpp"

namespace farsum {
namespace {

constexpr double kSortBytes =
    3 * sizeof(double) + 2 * (sizeof(std::uint64_t) + sizeof(std::uint32_t));       // keys and indices twice
constexpr double kPointBytes = 3 * sizeof(double) + sizeof(std::uint32_t);          // ordered coordinates and index
constexpr double kSourceBytes = sizeof(double), kTargetBytes = 5 * sizeof(double);  // ordered charge; nearest distance, results
constexpr double kNearEntries = 25;                                                 // of a box, on average
constexpr double kBoxBytes =
    2 * sizeof(Box) + kNearEntries * sizeof(ListEntry) + 80;  // vectors grow by doubling; accuracy tables

double row_bytes(int order, bool single_precision) {
  return single_precision ? double(row_length<float>(order) * sizeof(float))
                          : double(row_length<double>(order) * sizeof(double));
}

std::uint64_t total(double sources, double targets, double source_boxes, double target_boxes, bool same, bool tree,
                    double row) {
  const double points = same ? sources : sources + targets, boxes = same ? source_boxes : source_boxes + target_boxes;
  const double sort_peak = points * std::max(kSortBytes, kPointBytes);
  double evaluation = points * kPointBytes + sources * kSourceBytes + targets * kTargetBytes + boxes * 2 * sizeof(Box);
  if (tree) evaluation += boxes * (kBoxBytes - 2 * sizeof(Box)) + (source_boxes + target_boxes) * row;
  return std::uint64_t(std::max(sort_peak, evaluation));
}

}  // namespace

std::uint64_t predicted_bytes(const MemoryQuery& q) noexcept {
  constexpr double kBoxesPerLeaf = 8.0 / 7 * 1.15;  // the levels above, and partly filled boxes at the faces of the set
  const double source_boxes = kBoxesPerLeaf * double(q.sources) / q.leaf_fill + 9,
               target_boxes = kBoxesPerLeaf * double(q.targets) / q.leaf_fill + 9;
  return total(double(q.sources), double(q.targets), source_boxes, target_boxes, q.same_points, q.tree,
               row_bytes(typical_order(q.tolerance), single_precision_suffices(q.tolerance)));
}

std::uint64_t predicted_bytes(const Octree& sources, const Octree& targets, int order, bool single_precision) noexcept {
  return total(double(sources.count), double(targets.count), double(sources.boxes.size()), double(targets.boxes.size()),
               &sources == &targets, true, row_bytes(order, single_precision));
}

void refuse_above(std::uint64_t predicted, std::uint64_t ceiling) {
  if (ceiling == 0 || predicted <= ceiling) return;
  const auto mebibytes = [](std::uint64_t bytes) { return std::to_string((bytes + (1 << 20) - 1) >> 20) + " MiB"; };
  throw Error(ErrorCode::memory_refused,
              "this evaluation needs about " + mebibytes(predicted) + " but only " + mebibytes(ceiling) + " are allowed",
              "raise the memory limit, ask for a larger tolerance, or solve fewer charges");
}

}  // namespace farsum
