#pragma once
// One line of progress on a terminal: stage and percentage, rewritten in place. Silent when standard error is no terminal.
#include <chrono>
#include <string>

namespace farsum::command {

class Progress {
 public:
  explicit Progress(bool wanted);
  ~Progress() { clear(); }
  Progress(const Progress&) = delete;
  Progress& operator=(const Progress&) = delete;

  /// At most ten times a second; `fraction` in [0, 1], negative when not known.
  void show(const std::string& stage, double fraction);
  /// Removes the line, so that other text starts in the first column.
  void clear();

 private:
  bool active_;
  bool shown_ = false;
  std::string stage_;
  std::chrono::steady_clock::time_point last_{};
};

}  // namespace farsum::command
