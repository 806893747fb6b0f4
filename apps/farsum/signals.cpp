#include "apps/farsum/signals.hpp"

#include <signal.h>
#include <unistd.h>

#include <array>
#include <atomic>
#include <climits>
#include <cstring>

namespace farsum::command {
namespace {

// The handler may run between any two instructions of any thread, so names live in fixed storage and a slot is shown to the
// handler only while its text is complete.
struct Slot {
  std::array<char, PATH_MAX> path{};
  std::atomic<bool> in_use{false};
};
std::array<Slot, 4> slots;
static_assert(std::atomic<bool>::is_always_lock_free);

extern "C" void end_by_signal(int number) {
  for (Slot& slot : slots)
    if (slot.in_use.load(std::memory_order_acquire)) unlink(slot.path.data());
  // With the default action back and the signal let through, raising it again ends the process with its own number.
  signal(number, SIG_DFL);
  sigset_t only;
  sigemptyset(&only);
  sigaddset(&only, number);
  pthread_sigmask(SIG_UNBLOCK, &only, nullptr);
  raise(number);
}

}  // namespace

void install_signal_handlers() {
  for (const int number : {SIGINT, SIGTERM, SIGHUP}) {
    struct sigaction old {};
    if (sigaction(number, nullptr, &old) == 0 && old.sa_handler == SIG_IGN) continue;
    struct sigaction action {};
    action.sa_handler = end_by_signal;
    sigfillset(&action.sa_mask);
    sigaction(number, &action, nullptr);
  }
  signal(SIGPIPE, SIG_IGN);  // a closed pipe shows as a failed write
}

void remember_temporary(const std::string& path) {
  if (path.size() + 1 > PATH_MAX) return;
  for (Slot& slot : slots) {
    if (slot.in_use.load()) continue;
    std::memcpy(slot.path.data(), path.c_str(), path.size() + 1);
    slot.in_use.store(true, std::memory_order_release);
    return;
  }
}

void forget_temporary(const std::string& path) {
  for (Slot& slot : slots)
    if (slot.in_use.load() && path == slot.path.data()) slot.in_use.store(false, std::memory_order_release);
}

std::function<void(const std::string&)> temporary_hook() {
  return [current = std::string()](const std::string& path) mutable {
    if (!current.empty()) forget_temporary(current);
    current = path;
    if (!current.empty()) remember_temporary(current);
  };
}

}  // namespace farsum::command
