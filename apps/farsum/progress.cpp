#include "apps/farsum/progress.hpp"

#include <fmt/format.h>
#include <unistd.h>

#include <algorithm>
#include <cstdio>

namespace farsum::command {

Progress::Progress(bool wanted) : active_(wanted && isatty(STDERR_FILENO) == 1) {}

void Progress::show(const std::string& stage, double fraction) {
  if (!active_) return;
  const auto now = std::chrono::steady_clock::now();
  if (stage == stage_ && now - last_ < std::chrono::milliseconds(100)) return;
  stage_ = stage;
  last_ = now;
  shown_ = true;
  if (fraction < 0) {
    fmt::print(stderr, "\r\x1b[K{} ...", stage);
  } else {
    fmt::print(stderr, "\r\x1b[K{} {:3.0f} %", stage, 100 * std::clamp(fraction, 0.0, 1.0));
  }
  std::fflush(stderr);
}

void Progress::clear() {
  if (!active_ || !shown_) return;
  fmt::print(stderr, "\r\x1b[K");
  std::fflush(stderr);
  shown_ = false;
  stage_.clear();
}

}  // namespace farsum::command
