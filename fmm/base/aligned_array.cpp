#include "fmm/base/aligned_array.hpp"

#include <sys/mman.h>

#include <algorithm>
#include <new>

namespace farsum {
namespace {

constexpr std::size_t kCacheLine = 64;
constexpr std::size_t kHugePage = std::size_t{1} << 21;
constexpr std::size_t kHugeFrom = 2 * kHugePage;  // smaller blocks stay with the ordinary allocator

std::align_val_t alignment_of(std::size_t bytes) noexcept {
  return std::align_val_t{bytes >= kHugeFrom ? kHugePage : kCacheLine};
}

/// Small blocks keep their size; large ones are whole huge pages, which the system is asked to use: with small pages, page
/// faults and address look-ups cost a third of a solve of 10^6 charges.
std::size_t block_size(std::size_t bytes) noexcept {
  return bytes >= kHugeFrom ? (bytes + kHugePage - 1) / kHugePage * kHugePage : bytes;
}

void* new_block(std::size_t size) {
  void* const block = ::operator new(size, alignment_of(size));
  if (size >= kHugeFrom) (void)madvise(block, size, MADV_HUGEPAGE);  // only advice: the block works without
  return block;
}

void delete_block(void* block, std::size_t size) noexcept {
  ::operator delete(block, alignment_of(size));
}

}  // namespace

MemoryLedger::~MemoryLedger() {
  for (const Kept& kept : kept_)
    if (kept.block) delete_block(kept.block, kept.bytes);
}

void* MemoryLedger::take(std::size_t bytes) {
  const std::size_t size = block_size(bytes);
  if (size >= kHugeFrom) {
    const std::lock_guard lock(guard_);
    for (Kept& kept : kept_)
      if (kept.bytes == size) {
        kept.bytes = 0;
        return std::exchange(kept.block, nullptr);
      }
  }
  void* const block = new_block(size);
  add(size);
  return block;
}

void MemoryLedger::give_back(void* block, std::size_t bytes) noexcept {
  Kept returned{block, block_size(bytes)};
  if (returned.bytes >= kHugeFrom) {
    const std::lock_guard lock(guard_);
    Kept& smallest =
        *std::min_element(kept_.begin(), kept_.end(), [](const Kept& a, const Kept& b) { return a.bytes < b.bytes; });
    if (smallest.bytes < returned.bytes) std::swap(smallest, returned);
  }
  if (!returned.block) return;
  remove(returned.bytes);
  delete_block(returned.block, returned.bytes);
}

}  // namespace farsum
