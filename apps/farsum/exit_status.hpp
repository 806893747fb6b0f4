#pragma once
// How the command ends: the exit status for each kind of error.
#include "fmm/error.hpp"

namespace farsum::command {

enum ExitStatus : int {
  kDone = 0,
  kFailed = 1,
  kWrongUsage = 2,
  kAccuracyNotReached = 3,
  kMemoryRefused = 4,
};

ExitStatus exit_status(ErrorCode code) noexcept;

/// A command line that makes no sense, whatever the files hold: ends with kWrongUsage.
class UsageError : public Error {
 public:
  explicit UsageError(const std::string& message, std::string remedy = {})
      : Error(ErrorCode::invalid_argument, message, std::move(remedy)) {}
};

}  // namespace farsum::command
