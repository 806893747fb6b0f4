#include <sched.h>

#include <algorithm>
#include <atomic>
#include <exception>
#include <mutex>
#include <thread>
#include <vector>

#include "fmm/parallel/executor.hpp"

namespace farsum {

struct Executor::Backend {
  int threads = 1;
};

namespace {

int allowed_threads() {
  cpu_set_t set;
  CPU_ZERO(&set);
  if (sched_getaffinity(0, sizeof set, &set) == 0) return std::max(1, CPU_COUNT(&set));
  return std::max(1, int(std::thread::hardware_concurrency()));
}

}  // namespace

Executor::Executor(int limit) : backend_(std::make_unique<Backend>()) {
  const int allowed = allowed_threads();
  backend_->threads = limit > 0 ? limit : allowed;
}
Executor::~Executor() = default;

int Executor::threads() const noexcept {
  return backend_->threads;
}

void Executor::for_each(std::size_t count, std::size_t grain, const Body& body) {
  if (count == 0) return;
  const std::size_t pieces = (count + grain - 1) / grain;
  std::atomic<std::size_t> next{0};
  std::mutex failure_guard;
  std::exception_ptr failure;
  const auto work = [&](int worker) {
    for (std::size_t piece; (piece = next.fetch_add(1)) < pieces;) {
      try {
        body(piece * grain, std::min(count, (piece + 1) * grain), worker);
      } catch (...) {
        const std::lock_guard lock(failure_guard);
        if (!failure) failure = std::current_exception();
        next.store(pieces);
      }
    }
  };
  std::vector<std::thread> team;
  const int extra = int(std::min<std::size_t>(std::size_t(backend_->threads), pieces)) - 1;
  for (int worker = 1; worker <= extra; ++worker) team.emplace_back(work, worker);
  work(0);
  for (std::thread& thread : team) thread.join();
  if (failure) std::rethrow_exception(failure);
}

}  // namespace farsum
