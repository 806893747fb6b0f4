#pragma once
// Adds the lifetime of a scope to a number of seconds.
#include <chrono>

namespace farsum {

class Stopwatch {
 public:
  explicit Stopwatch(double& seconds) : seconds_(seconds), start_(Clock::now()) {}
  ~Stopwatch() { seconds_ += std::chrono::duration<double>(Clock::now() - start_).count(); }
  Stopwatch(const Stopwatch&) = delete;
  Stopwatch& operator=(const Stopwatch&) = delete;

 private:
  using Clock = std::chrono::steady_clock;
  double& seconds_;
  Clock::time_point start_;
};

}  // namespace farsum
