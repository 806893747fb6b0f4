#include "io/output_file.hpp"

#include <fcntl.h>
#include <fmt/format.h>
#include <sys/stat.h>
#include <sys/statvfs.h>
#include <unistd.h>

#include <cerrno>
#include <cstdio>
#include <cstring>
#include <filesystem>
#include <random>

#include "fmm/error.hpp"

namespace farsum::io {
namespace {

namespace fs = std::filesystem;

[[noreturn]] void refuse(ErrorCode code, const std::string& path, const std::string& message, const std::string& remedy = {}) {
  throw Error(code, message, path, {}, remedy);
}

ErrorCode code_of(int number) {
  return number == ENOSPC || number == EDQUOT || number == EFBIG ? ErrorCode::disk_full : ErrorCode::file_not_writable;
}

std::string folder_of(const std::string& path) {
  const fs::path parent = fs::path(path).parent_path();
  return parent.empty() ? "." : parent.string();
}

/// The file that a symbolic link names; relative names are relative to the link's folder.
std::string follow_once(const std::string& path) {
  struct stat facts {};
  if (lstat(path.c_str(), &facts) != 0 || !S_ISLNK(facts.st_mode)) return path;
  std::error_code problem;
  const fs::path named = fs::read_symlink(path, problem);
  if (problem) refuse(ErrorCode::file_not_writable, path, "the symbolic link cannot be read: " + problem.message());
  const std::string target = named.is_absolute() ? named.string() : (fs::path(folder_of(path)) / named).string();
  if (lstat(target.c_str(), &facts) == 0 && S_ISLNK(facts.st_mode)) {
    refuse(ErrorCode::file_not_writable, path, "is a symbolic link to a symbolic link", "name the file itself");
  }
  return target;
}

void check_folder(const std::string& path, std::uint64_t expected_bytes) {
  const std::string folder = folder_of(path);
  struct stat facts {};
  if (stat(folder.c_str(), &facts) != 0) {
    refuse(ErrorCode::file_not_writable, path, fmt::format("its folder cannot be used: {}", std::strerror(errno)),
           "create the folder first");
  }
  if (!S_ISDIR(facts.st_mode)) refuse(ErrorCode::file_not_writable, path, fmt::format("'{}' is no folder", folder));
  if (access(folder.c_str(), W_OK | X_OK) != 0) {
    refuse(ErrorCode::file_not_writable, path, fmt::format("its folder cannot be written: {}", std::strerror(errno)),
           "choose another folder or change its permissions");
  }
  struct statvfs space {};
  if (statvfs(folder.c_str(), &space) != 0) return;
  const double free_bytes = static_cast<double>(space.f_bavail) * static_cast<double>(space.f_frsize);
  if (space.f_blocks > 0 && static_cast<double>(expected_bytes) > free_bytes) {
    refuse(ErrorCode::disk_full, path,
           fmt::format("needs about {:.0f} MiB, its disk has {:.0f} MiB left", static_cast<double>(expected_bytes) / 1048576.0,
                       free_bytes / 1048576.0),
           "free some space or choose another folder");
  }
}

std::string random_word() {
  std::random_device device;
  return fmt::format("{:08x}", device());
}

void sync_folder(const std::string& path) {
  const int folder = open(folder_of(path).c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC);
  if (folder < 0) return;
  fsync(folder);  // some network file systems cannot; the file itself is safe by then
  close(folder);
}

}  // namespace

std::string check_output_target(const std::string& path, bool overwrite, std::uint64_t expected_bytes,
                                const std::vector<std::string>& inputs) {
  if (path.empty() || path.back() == '/') refuse(ErrorCode::file_not_writable, path, "is no file name");
  const std::string target = follow_once(path);
  struct stat facts {};
  const bool exists = stat(target.c_str(), &facts) == 0;
  if (exists) {
    if (S_ISDIR(facts.st_mode)) refuse(ErrorCode::file_not_writable, path, "is a folder", "name a file in it");
    if (!S_ISREG(facts.st_mode)) refuse(ErrorCode::file_not_writable, path, "is no regular file");
    for (const std::string& input : inputs) {
      struct stat other {};
      if (stat(input.c_str(), &other) == 0 && other.st_dev == facts.st_dev && other.st_ino == facts.st_ino) {
        refuse(ErrorCode::file_not_writable, path, "is the input itself", "name another output");
      }
    }
    if (!overwrite)
      refuse(ErrorCode::file_exists, path, "exists already", "choose another name or replace it with --overwrite");
  }
  check_folder(target, expected_bytes);
  return target;
}

OutputFile::OutputFile(std::string target, bool overwrite, TemporaryHook hook)
    : target_(std::move(target)), overwrite_(overwrite), hook_(std::move(hook)) {
  const fs::path folder = fs::absolute(folder_of(target_));
  const std::string name = fs::path(target_).filename().string().substr(0, 180);
  temporary_ = (folder / fmt::format(".{}.{}.{}.tmp", name, getpid(), random_word())).string();
  if (hook_) hook_(temporary_);
}

OutputFile::~OutputFile() {
  if (temporary_.empty()) return;
  unlink(temporary_.c_str());
  forget();
}

void OutputFile::forget() noexcept {
  temporary_.clear();
  try {
    if (hook_) hook_({});
  } catch (...) {  // a hook has nothing to fail at; the file is settled either way
  }
}

void OutputFile::commit() {
  const int file = open(temporary_.c_str(), O_RDONLY | O_CLOEXEC);
  if (file < 0)
    refuse(ErrorCode::file_not_writable, target_, fmt::format("the written file cannot be opened: {}", std::strerror(errno)));
  const int status = fsync(file), reason = errno;
  close(file);
  if (status != 0) refuse(code_of(reason), target_, fmt::format("cannot be written to the disk: {}", std::strerror(reason)));
  if (!overwrite_) {
    // link() fails where the name exists, which rename() would replace; file systems without hard links get the rename.
    if (link(temporary_.c_str(), target_.c_str()) == 0) {
      unlink(temporary_.c_str());
      forget();
      return sync_folder(target_);
    }
    if (errno == EEXIST)
      refuse(ErrorCode::file_exists, target_, "exists already", "choose another name or replace it with --overwrite");
  }
  if (std::rename(temporary_.c_str(), target_.c_str()) != 0) {
    refuse(code_of(errno), target_, fmt::format("cannot be replaced: {}", std::strerror(errno)));
  }
  forget();
  sync_folder(target_);
}

}  // namespace farsum::io
