#include "apps/farsum/exit_status.hpp"

namespace farsum::command {

ExitStatus exit_status(ErrorCode code) noexcept {
  switch (code) {
    case ErrorCode::tolerance_unreachable:
    case ErrorCode::accuracy_not_reached:
      return kAccuracyNotReached;
    case ErrorCode::memory_refused:
    case ErrorCode::out_of_memory:
      return kMemoryRefused;
    default:
      return kFailed;
  }
}

}  // namespace farsum::command
