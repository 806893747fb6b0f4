#include "io/hdf5/handle.hpp"

#include <cerrno>
#include <cstring>

namespace farsum::io::hdf5 {
namespace {

std::recursive_mutex& library_mutex() {
  static std::recursive_mutex mutex;
  return mutex;
}

herr_t keep_first(unsigned, const H5E_error2_t* entry, void* text) {
  std::string& reason = *static_cast<std::string*>(text);
  if (reason.empty() && entry->desc) reason = entry->desc;
  return 0;
}

/// Innermost reason on the error stack, on one line of bounded length.
std::string take_reason() {
  std::string reason;
  H5Ewalk2(H5E_DEFAULT, H5E_WALK_UPWARD, keep_first, &reason);
  H5Eclear2(H5E_DEFAULT);
  for (char& letter : reason)
    if (static_cast<unsigned char>(letter) < ' ') letter = ' ';
  if (reason.size() > 200) reason.resize(200);
  return reason;
}

bool tells_full_disk(const std::string& reason) {
  for (const int number : {ENOSPC, EDQUOT, EFBIG})
    if (reason.find(std::strerror(number)) != std::string::npos) return true;
  return false;
}

}  // namespace

Handle& Handle::operator=(Handle&& other) noexcept {
  if (this != &other) {
    reset();
    id_ = std::exchange(other.id_, -1);
    close_ = other.close_;
  }
  return *this;
}

void Handle::reset() noexcept {
  (void)close();
}

bool Handle::close() noexcept {
  const hid_t id = std::exchange(id_, -1);
  return id < 0 || close_(id) >= 0;
}

Session::Session() : lock_(library_mutex()) {
  // No code is ever loaded because a file names a filter. The setting is the process's, and only ever made stricter.
  H5open();
  H5PLset_loading_state(0);
  H5Eget_auto2(H5E_DEFAULT, &old_function_, &old_data_);
  H5Eset_auto2(H5E_DEFAULT, nullptr, nullptr);
}

Session::~Session() {
  H5Eclear2(H5E_DEFAULT);
  H5Eset_auto2(H5E_DEFAULT, old_function_, old_data_);
}

void fail(ErrorCode code, const std::string& file, const std::string& item, const std::string& message,
          const std::string& remedy) {
  const std::string reason = take_reason();
  if (tells_full_disk(reason)) {
    throw Error(ErrorCode::disk_full, "no space left on the device", file, item, "free some space or choose another folder");
  }
  throw Error(code, reason.empty() ? message : message + " (" + reason + ")", file, item, remedy);
}

Handle own(hid_t id, Handle::Close close, ErrorCode code, const std::string& file, const std::string& item,
           const char* message) {
  if (id < 0) fail(code, file, item, message);
  return Handle(id, close);
}

void check(herr_t status, ErrorCode code, const std::string& file, const std::string& item, const char* message) {
  if (status < 0) fail(code, file, item, message);
}

}  // namespace farsum::io::hdf5
