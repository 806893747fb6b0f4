#include "fmm/schedule/direct.hpp"

#include <algorithm>
#include <array>

#include "fmm/base/padding.hpp"

namespace farsum {
namespace {

constexpr std::size_t kTargetBlock = 64;   // even, so that a pair of targets has its self partners in one vector
constexpr std::size_t kSourceTile = 2048;  // 64 KiB of sources, from second-level cache for every pair of targets
constexpr double kFarSquared = 1e300;
constexpr std::size_t kBlocksBetweenCheckpoints = 256;

struct BlockSums {
  std::array<double, kTargetBlock> potential{}, x{}, y{}, z{}, nearest;
  BlockSums() { nearest.fill(kFarSquared); }
};

void sum_block(const EvaluationJob& job, std::size_t begin, std::size_t end) {
  const Octree &s = job.sources, &t = job.targets;
  BlockSums sums;
  for (std::size_t tile = 0; tile < s.count; tile += kSourceTile) {
    const std::size_t tile_end = std::min(s.count, tile + kSourceTile);
    const bool own = job.same_points() && begin >= tile && begin < tile_end;
    job.kernels.pair_sums(
        {s.x.data() + tile, s.y.data() + tile, s.z.data() + tile, job.charges + tile, round_up(tile_end - tile, kSourcePad),
         t.x.data() + begin, t.y.data() + begin, t.z.data() + begin, end - begin, own ? std::ptrdiff_t(begin - tile) : -1,
         sums.potential.data(), sums.x.data(), sums.y.data(), sums.z.data(), sums.nearest.data()},
        job.root_accuracy, job.mask_zero, job.with_field);
  }
  for (std::size_t i = 0; i < end - begin; ++i) {
    job.results.store(begin + i, sums.potential[i], sums.x[i], sums.y[i], sums.z[i]);
    job.nearest_squared[begin + i] = sums.nearest[i];
  }
}

}  // namespace

void evaluate_direct(const EvaluationJob& job) {
  static_assert(kSourceTile % kTargetBlock == 0 && kTargetBlock % 2 == 0);
  const std::size_t n = job.targets.count, stride = kTargetBlock * kBlocksBetweenCheckpoints;
  for (std::size_t first = 0; first < n; first += stride) {
    job.checkpoint(Phase::near, double(first) / double(n));
    const std::size_t last = std::min(n, first + stride);
    job.executor.for_each(last - first, kTargetBlock,
                          [&](std::size_t begin, std::size_t end, int) { sum_block(job, first + begin, first + end); });
  }
}

}  // namespace farsum
