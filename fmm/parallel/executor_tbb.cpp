#include <tbb/parallel_for.h>
#include <tbb/task_arena.h>

#include <algorithm>

#include "fmm/parallel/executor.hpp"

namespace farsum {

struct Executor::Backend {
  explicit Backend(int limit) : arena(limit) {}
  tbb::task_arena arena;
};

Executor::Executor(int limit) {
  const int allowed = tbb::this_task_arena::max_concurrency();
  backend_ = std::make_unique<Backend>(limit > 0 ? std::min(limit, allowed) : allowed);
}
Executor::~Executor() = default;

int Executor::threads() const noexcept {
  return backend_->arena.max_concurrency();
}

void Executor::for_each(std::size_t count, std::size_t grain, const Body& body) {
  if (count == 0) return;
  const std::size_t pieces = (count + grain - 1) / grain;
  if (pieces == 1 || threads() == 1) {
    for (std::size_t piece = 0; piece < pieces; ++piece) body(piece * grain, std::min(count, (piece + 1) * grain), 0);
    return;
  }
  backend_->arena.execute([&] {
    tbb::parallel_for(
        std::size_t{0}, pieces,
        [&](std::size_t piece) {
          body(piece * grain, std::min(count, (piece + 1) * grain), tbb::this_task_arena::current_thread_index());
        },
        tbb::simple_partitioner());
  });
}

}  // namespace farsum
