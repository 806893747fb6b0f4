#pragma once
// Files that appear whole or not at all: written under a temporary name in the target's folder, flushed to the disk, then
// renamed.
#include <cstdint>
#include <functional>
#include <string>
#include <vector>

namespace farsum::io {

/// Told the absolute path of the temporary before it is created, and "" after it was renamed or removed, so that a signal
/// handler of the caller can remove it.
using TemporaryHook = std::function<void(const std::string&)>;

/// Checks before any work that `path` can be written: its folder exists and is writable, the target is no directory or device,
/// does not exist (unless `overwrite`), is none of `inputs` (same device and inode), and `expected_bytes` fit on the disk.
/// A symbolic link is followed once: the file it names is replaced, the link stays. Returns the path that will be replaced.
/// Throws Error: file_exists, file_not_writable, disk_full.
std::string check_output_target(const std::string& path, bool overwrite, std::uint64_t expected_bytes,
                                const std::vector<std::string>& inputs = {});

/// One output on its way. The writer creates and fills `temporary()` and calls commit(); without it the destructor removes the
/// temporary and the target stays as it was.
class OutputFile {
 public:
  /// `target` as returned by check_output_target. The name of the temporary is `.NAME.PID.RANDOM.tmp`.
  OutputFile(std::string target, bool overwrite, TemporaryHook hook = {});
  ~OutputFile();
  OutputFile(const OutputFile&) = delete;
  OutputFile& operator=(const OutputFile&) = delete;

  const std::string& temporary() const noexcept { return temporary_; }
  /// fsync, rename onto the target, fsync of the folder. Without `overwrite` a target that came into being meanwhile is kept
  /// and the call throws file_exists.
  void commit();

 private:
  void forget() noexcept;
  std::string target_, temporary_;
  bool overwrite_ = false;
  TemporaryHook hook_;
};

}  // namespace farsum::io
