// A deliberate data race on the project's own threads: under ThreadSanitizer this program must be reported. It shows that the
// silence of the other tests means something. Both pieces are under way at once, held by relaxed atomics that order nothing.
#include <atomic>
#include <cstdio>

#include "fmm/parallel/executor.hpp"

int main() {
  farsum::Executor executor(2);
  std::atomic<int> started{0};
  int unguarded = 0;
  executor.for_each(2, 1, [&](std::size_t begin, std::size_t, int) {
    started.fetch_add(1, std::memory_order_relaxed);
    while (started.load(std::memory_order_relaxed) < 2) {
    }
    unguarded += int(begin) + 1;
  });
  std::printf("no race noticed (sum %d)\n", unguarded);
  return 0;
}
