#include "fmm/parallel/executor.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <atomic>
#include <stdexcept>
#include <utility>
#include <vector>

namespace farsum {
namespace {

using Pieces = std::vector<std::pair<std::size_t, std::size_t>>;

/// Pieces by place, as a run on `threads` threads hands them out.
Pieces pieces_of(int threads, std::size_t count, std::size_t grain) {
  Executor executor(threads);
  Pieces found((count + grain - 1) / grain);
  executor.for_each(count, grain, [&](std::size_t begin, std::size_t end, int) { found[begin / grain] = {begin, end}; });
  return found;
}

TEST(Executor, PiecesDependOnCountAndGrainOnly) {
  for (const auto& [count, grain] : Pieces{{1, 1}, {10, 3}, {12, 3}, {1000, 7}, {5, 100}}) {
    Pieces expected;
    for (std::size_t begin = 0; begin < count; begin += grain) expected.push_back({begin, std::min(count, begin + grain)});
    for (int threads : {1, 2, 5}) EXPECT_EQ(pieces_of(threads, count, grain), expected) << count << " by " << grain;
  }
}

TEST(Executor, NoElementsMeansNoCall) {
  Executor executor(2);
  executor.for_each(0, 4, [](std::size_t, std::size_t, int) { FAIL(); });
}

TEST(Executor, EveryElementIsVisitedOnce) {
  Executor executor(4);
  std::vector<std::atomic<int>> visits(10007);
  executor.for_each(visits.size(), 13, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t i = begin; i < end; ++i) ++visits[i];
  });
  for (const std::atomic<int>& count : visits) ASSERT_EQ(count, 1);
}

TEST(Executor, AnExceptionOfTheBodyReachesTheCaller) {
  for (int threads : {1, 3}) {
    Executor executor(threads);
    EXPECT_THROW(executor.for_each(100, 1,
                                   [](std::size_t begin, std::size_t, int) {
                                     if (begin == 57) throw std::domain_error("57");
                                   }),
                 std::domain_error);
  }
}

TEST(Executor, WorksAgainAfterAnException) {
  Executor executor(3);
  EXPECT_THROW(executor.for_each(10, 1, [](std::size_t, std::size_t, int) { throw 1; }), int);
  std::atomic<int> calls{0};
  executor.for_each(10, 1, [&](std::size_t, std::size_t, int) { ++calls; });
  EXPECT_EQ(calls, 10);
}

TEST(Executor, WorkerNumbersStayBelowTheNumberOfThreads) {
  for (int threads : {0, 1, 2}) {
    Executor executor(threads);
    std::atomic<int> highest{-1}, lowest{1 << 20};
    executor.for_each(2000, 1, [&](std::size_t, std::size_t, int worker) {
      for (int seen = highest; worker > seen && !highest.compare_exchange_weak(seen, worker);) {
      }
      for (int seen = lowest; worker < seen && !lowest.compare_exchange_weak(seen, worker);) {
      }
    });
    EXPECT_GE(lowest, 0);
    EXPECT_LT(highest, executor.threads());
  }
}

TEST(Executor, AWorkerNumberIsHeldByOneThreadAtATime) {
  Executor executor(4);
  std::vector<std::atomic<int>> inside(std::size_t(executor.threads()));
  std::atomic<bool> shared{false};
  executor.for_each(4000, 1, [&](std::size_t, std::size_t, int worker) {
    if (++inside[std::size_t(worker)] != 1) shared = true;
    --inside[std::size_t(worker)];
  });
  EXPECT_FALSE(shared);
}

TEST(Executor, ScratchOfAWorkerNeedsNoLock) {
  Executor executor(0);
  std::vector<std::size_t> sums(std::size_t(executor.threads()), 0);
  executor.for_each(5000, 3, [&](std::size_t begin, std::size_t end, int worker) {
    for (std::size_t i = begin; i < end; ++i) sums[std::size_t(worker)] += i;
  });
  std::size_t sum = 0;
  for (std::size_t part : sums) sum += part;
  EXPECT_EQ(sum, std::size_t{5000} * 4999 / 2);
}

TEST(Executor, TheLimitIsNotExceeded) {
  EXPECT_EQ(Executor(1).threads(), 1);
  EXPECT_LE(Executor(2).threads(), 2);
  EXPECT_GE(Executor(0).threads(), 1);
}

TEST(Executor, LoopsMayBeNested) {
  Executor executor(2);
  std::atomic<int> calls{0};
  executor.for_each(
      8, 1, [&](std::size_t, std::size_t, int) { executor.for_each(8, 1, [&](std::size_t, std::size_t, int) { ++calls; }); });
  EXPECT_EQ(calls, 64);
}

}  // namespace
}  // namespace farsum
