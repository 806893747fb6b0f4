#include "fmm/base/aligned_array.hpp"

#include <sys/mman.h>

#include <new>

namespace farsum {
namespace {

constexpr std::size_t kCacheLine = 64;
constexpr std::size_t kHugePage = std::size_t{1} << 21;
constexpr std::size_t kHugeFrom = 2 * kHugePage;  // smaller blocks stay with the ordinary allocator

std::align_val_t alignment_of(std::size_t bytes) noexcept {
  return std::align_val_t{bytes >= kHugeFrom ? kHugePage : kCacheLine};
}

}  // namespace

void* allocate_pages(std::size_t bytes) {
  void* const block = ::operator new(bytes, alignment_of(bytes));
  // Only advice: where huge pages are off or unknown the block works as it is. The end is left out, it may share its page.
  if (bytes >= kHugeFrom) (void)madvise(block, bytes / kHugePage * kHugePage, MADV_HUGEPAGE);
  return block;
}

void release_pages(void* block, std::size_t bytes) noexcept {
  ::operator delete(block, alignment_of(bytes));
}

}  // namespace farsum
