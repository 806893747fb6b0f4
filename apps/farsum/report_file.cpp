// Where the JSON report goes: standard output, a special file, or a regular file that is replaced atomically.
#include <fcntl.h>
#include <fmt/format.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstring>
#include <filesystem>
#include <fstream>

#include "apps/farsum/run_report.hpp"
#include "apps/farsum/signals.hpp"

namespace farsum::command {
namespace {

namespace fs = std::filesystem;

[[noreturn]] void fail(const std::string& path, const std::string& what) {
  throw Error(ErrorCode::file_not_writable, what, path, {}, "name another file with --json");
}

std::string reason() {
  return std::strerror(errno);
}

/// Writes all of `text`, or tells why not.
void write_all(int descriptor, const std::string& text, const std::string& path) {
  for (std::size_t done = 0; done < text.size();) {
    const ssize_t written = write(descriptor, text.data() + done, text.size() - done);
    if (written < 0 && errno == EINTR) continue;
    if (written <= 0) fail(path, fmt::format("cannot write the report ({})", reason()));
    done += std::size_t(written);
  }
}

/// One level of symbolic link is followed, so that a link stays a link.
fs::path real_target(const std::string& path) {
  std::error_code ignored;
  fs::path target(path);
  if (fs::is_symlink(target, ignored)) {
    const fs::path pointed = fs::read_symlink(target, ignored);
    target = pointed.is_absolute() ? pointed : target.parent_path() / pointed;
  }
  return target;
}

fs::path folder_of(const fs::path& target) {
  return target.has_parent_path() ? target.parent_path() : fs::path(".");
}

void write_special(const RunReport& report, const std::string& path) {
  const int descriptor = open(path.c_str(), O_WRONLY | O_CLOEXEC);
  if (descriptor < 0) fail(path, fmt::format("cannot open the report file ({})", reason()));
  try {
    write_all(descriptor, report.text(), path);
  } catch (...) {
    close(descriptor);
    throw;
  }
  close(descriptor);
}

void replace_file(const RunReport& report, const std::string& path) {
  const fs::path target = real_target(path);
  const fs::path folder = folder_of(target);
  const std::string temporary = (folder / fmt::format(".{}.{}.tmp", target.filename().string(), getpid())).string();
  remember_temporary(fs::absolute(temporary).string());
  const int descriptor = open(temporary.c_str(), O_WRONLY | O_CREAT | O_EXCL | O_CLOEXEC, 0666);
  if (descriptor < 0) {
    forget_temporary(fs::absolute(temporary).string());
    fail(path, fmt::format("cannot create the report ({})", reason()));
  }
  try {
    write_all(descriptor, report.text(), path);
    if (fsync(descriptor) != 0) fail(path, fmt::format("cannot write the report ({})", reason()));
    if (rename(temporary.c_str(), target.c_str()) != 0) fail(path, fmt::format("cannot rename the report ({})", reason()));
  } catch (...) {
    close(descriptor);
    unlink(temporary.c_str());
    forget_temporary(fs::absolute(temporary).string());
    throw;
  }
  close(descriptor);
  forget_temporary(fs::absolute(temporary).string());
}

bool is_earlier_report(const fs::path& target) {
  std::ifstream in(target, std::ios::binary);
  std::string head(64, '\0');
  in.read(head.data(), std::streamsize(head.size()));
  head.resize(std::size_t(in.gcount()));
  return head.empty() || head.find("\"report_version\"") != std::string::npos;
}

}  // namespace

void write_report(const RunReport& report, const std::string& path) {
  if (path == "-") {
    write_all(STDOUT_FILENO, report.text(), "standard output");
    return;
  }
  struct stat info {};
  if (stat(path.c_str(), &info) == 0 && !S_ISREG(info.st_mode)) {
    write_special(report, path);
  } else {
    replace_file(report, path);
  }
}

void check_report_path(const std::string& path, bool overwrite) {
  if (path.empty() || path == "-") return;
  struct stat info {};
  if (stat(path.c_str(), &info) == 0) {
    if (S_ISDIR(info.st_mode)) fail(path, "the report cannot be written: this is a folder");
    if (access(path.c_str(), W_OK) != 0) fail(path, fmt::format("the report cannot be written ({})", reason()));
    if (!S_ISREG(info.st_mode)) return;
    if (!overwrite && !is_earlier_report(path))
      throw Error(ErrorCode::file_exists, "exists and is not a report of farsum", path, {},
                  "name another file with --json or add --overwrite");
  }
  const fs::path folder = folder_of(real_target(path));
  if (access(folder.c_str(), W_OK | X_OK) != 0)
    fail(path, fmt::format("the report cannot be written: folder {} ({})", folder.string(), reason()));
}

}  // namespace farsum::command
