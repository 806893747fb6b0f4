#pragma once
// An end by SIGINT, SIGTERM or SIGHUP leaves no partial file behind and shows as "killed by signal" to the caller.
#include <functional>
#include <string>

namespace farsum::command {

/// From now on these signals remove the temporary files named below and then end the process by the same signal. Signals that
/// were ignored at the start (nohup) stay ignored.
void install_signal_handlers();

/// Name of a temporary file to remove when a signal arrives. Kept until forget_temporary; up to four at a time.
void remember_temporary(const std::string& path);
void forget_temporary(const std::string& path);

/// A hook for a writer that tells the name of its temporary file before it is created and an empty name when it is gone.
std::function<void(const std::string&)> temporary_hook();

}  // namespace farsum::command
