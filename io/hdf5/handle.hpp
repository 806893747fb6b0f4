#pragma once
// Owned HDF5 identifiers, the guard around every piece of HDF5 work, and errors with the library's own reason.
#include <hdf5.h>

#include <mutex>
#include <string>
#include <utility>

#include "fmm/error.hpp"

namespace farsum::io::hdf5 {

/// One HDF5 identifier and the function that closes it. The destructor swallows failures; writers call close().
class Handle {
 public:
  using Close = herr_t (*)(hid_t);
  Handle() = default;
  Handle(hid_t id, Close closer) noexcept : id_(id), close_(closer) {}
  Handle(Handle&& other) noexcept : id_(std::exchange(other.id_, -1)), close_(other.close_) {}
  Handle& operator=(Handle&& other) noexcept;
  ~Handle() { reset(); }

  hid_t get() const noexcept { return id_; }
  explicit operator bool() const noexcept { return id_ >= 0; }
  void reset() noexcept;
  /// Closes now; false when the library reports a failure. The handle is empty afterwards.
  bool close() noexcept;

 private:
  hid_t id_ = -1;
  Close close_ = nullptr;
};

/// Serialises HDF5 work, keeps the library from printing and from loading plug-ins, and restores the thread's error setting at
/// its end. Every public function that touches HDF5 holds one.
class Session {
 public:
  Session();
  ~Session();
  Session(const Session&) = delete;
  Session& operator=(const Session&) = delete;

 private:
  std::unique_lock<std::recursive_mutex> lock_;
  H5E_auto2_t old_function_ = nullptr;
  void* old_data_ = nullptr;
};

/// Throws Error(code) whose message ends with the innermost reason on the library's error stack, and clears the stack. A reason
/// that tells of a full disk turns the code into disk_full.
[[noreturn]] void fail(ErrorCode code, const std::string& file, const std::string& item, const std::string& message,
                       const std::string& remedy = {});

/// The identifier as an owned handle, or fail() when the call that made it failed.
Handle own(hid_t id, Handle::Close close, ErrorCode code, const std::string& file, const std::string& item,
           const char* message);

/// fail() when an HDF5 call returned a negative status.
void check(herr_t status, ErrorCode code, const std::string& file, const std::string& item, const char* message);

}  // namespace farsum::io::hdf5
