#include "fmm/base/aligned_array.hpp"

#include <gtest/gtest.h>

#include <cstdint>

#include "fmm/base/padding.hpp"

namespace farsum {
namespace {

TEST(MemoryLedger, PeakIsTheLargestSumHeldAtOnce) {
  MemoryLedger ledger;
  ledger.add(100);
  ledger.add(50);
  ledger.remove(120);
  ledger.add(10);
  EXPECT_EQ(ledger.current(), 40u);
  EXPECT_EQ(ledger.peak(), 150u);
}

TEST(MemoryLedger, RestartedPeakForgetsWhatWasReleased) {
  MemoryLedger ledger;
  ledger.add(100);
  ledger.remove(70);
  ledger.restart_peak();
  EXPECT_EQ(ledger.peak(), 30u);
}

TEST(AlignedArray, StartsAtACacheLineWhateverItsSize) {
  MemoryLedger ledger;
  for (std::size_t size : {1u, 3u, 7u, 64u, 1000u, 600000u}) {
    const AlignedArray<double> array(ledger, size);
    EXPECT_EQ(reinterpret_cast<std::uintptr_t>(array.data()) % 64, 0u) << size;
  }
}

TEST(AlignedArray, LargeBlocksCanBeWrittenToTheLastElement) {
  MemoryLedger ledger;
  AlignedArray<double> array(ledger, (std::size_t{1} << 20) + 3);
  for (double& value : array) value = 2.5;
  EXPECT_EQ(array[array.size() - 1], 2.5);
  EXPECT_EQ(reinterpret_cast<std::uintptr_t>(array.data()) % (1u << 21), 0u);
}

TEST(AlignedArray, IsCountedWhileItLives) {
  MemoryLedger ledger;
  {
    const AlignedArray<float> array(ledger, 10);
    EXPECT_EQ(ledger.current(), 40u);
  }
  EXPECT_EQ(ledger.current(), 0u);
  EXPECT_EQ(ledger.peak(), 40u);
}

TEST(AlignedArray, OfNoElementsOwnsNothing) {
  MemoryLedger ledger;
  const AlignedArray<int> array(ledger, 0);
  EXPECT_TRUE(array.empty());
  EXPECT_EQ(array.begin(), array.end());
  EXPECT_EQ(ledger.peak(), 0u);
}

TEST(AlignedArray, MoveConstructionHandsOverTheBlock) {
  MemoryLedger ledger;
  AlignedArray<int> from(ledger, 4);
  from[3] = 17;
  const int* const block = from.data();
  const AlignedArray<int> to(std::move(from));
  EXPECT_EQ(to.data(), block);
  EXPECT_EQ(to[3], 17);
  EXPECT_TRUE(from.empty());  // NOLINT: the moved-from state is what is tested
  EXPECT_EQ(ledger.current(), 16u);
}

TEST(AlignedArray, MoveAssignmentReleasesTheOldBlockInItsOwnLedger) {
  MemoryLedger first, second;
  AlignedArray<int> a(first, 4);
  {
    AlignedArray<int> b(second, 8);
    a = std::move(b);
  }
  EXPECT_EQ(first.current(), 0u);
  EXPECT_EQ(second.current(), 32u);
  EXPECT_EQ(a.size(), 8u);
}

TEST(AlignedArray, AssigningAnEmptyArrayFreesIt) {
  MemoryLedger ledger;
  AlignedArray<int> array(ledger, 4);
  array = {};
  EXPECT_EQ(array.data(), nullptr);
  EXPECT_EQ(ledger.current(), 0u);
}

TEST(LedgerShare, CountsForAsLongAsItLives) {
  MemoryLedger ledger;
  {
    LedgerShare share;
    share = LedgerShare(ledger, 70);
    const LedgerShare kept(std::move(share));
    EXPECT_EQ(ledger.current(), 70u);
  }
  EXPECT_EQ(ledger.current(), 0u);
  EXPECT_EQ(ledger.peak(), 70u);
}

TEST(Padding, RoundsUpToWholeBlocks) {
  EXPECT_EQ(round_up(0, 8), 0u);
  EXPECT_EQ(round_up(1, 8), 8u);
  EXPECT_EQ(round_up(8, 8), 8u);
  EXPECT_EQ(round_up(9, 8), 16u);
}

}  // namespace
}  // namespace farsum
