#pragma once
// Runs loops on a limited number of threads. The pieces of a loop are a pure function of (count, grain), never of the number of
// threads, so a body that writes only what belongs to its piece gives the same bits for any thread count.
// Two back ends with one interface: TBB tasks (default) and plain std::thread (FARSUM_PARALLEL=threads, for ThreadSanitizer).
#include <cstddef>
#include <functional>
#include <memory>

namespace farsum {

class Executor {
 public:
  /// begin, end: the piece; worker: number below threads() of the thread that runs it, for scratch memory.
  using Body = std::function<void(std::size_t begin, std::size_t end, int worker)>;

  /// limit = 0: all threads that this process (and the calling TBB arena) may use.
  explicit Executor(int limit);
  ~Executor();
  Executor(const Executor&) = delete;
  Executor& operator=(const Executor&) = delete;

  int threads() const noexcept;

  /// Calls body for the pieces [0, grain), [grain, 2 grain), ... of [0, count) and returns when all are done.
  /// An exception of the body is rethrown here after the running pieces ended.
  void for_each(std::size_t count, std::size_t grain, const Body& body);

 private:
  struct Backend;
  std::unique_ptr<Backend> backend_;
};

}  // namespace farsum
