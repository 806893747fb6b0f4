#pragma once
// A file opened for reading that is not trusted: its structure is checked before HDF5 sees it (header_check.hpp), links to
// other files are refused, lists and attributes are bounded.
#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "io/hdf5/handle.hpp"

namespace farsum::io::hdf5 {

/// True if the file begins with the HDF5 signature (possibly after a user block). Needs a Session.
bool has_signature(const std::string& path);

enum class Kind { none, group, dataset, other };

/// Joins two absolute or relative group paths with one slash; "." and empty pieces vanish.
std::string join(const std::string& base, const std::string& name);

class InputFile {
 public:
  /// Throws file_damaged (truncated, not HDF5), file_not_readable (locked by a writer).
  InputFile(const std::string& path, bool allow_external);
  InputFile(const InputFile&) = delete;
  InputFile& operator=(const InputFile&) = delete;

  const std::string& path() const noexcept { return path_; }
  bool allow_external() const noexcept { return allow_external_; }

  /// What lies at an absolute path. Throws file_unsafe for a link to another file, file_damaged for a link that leads nowhere.
  Kind kind(const std::string& object) const;
  bool is_group(const std::string& object) const { return kind(object) == Kind::group; }
  /// Throws item_missing.
  Handle open_object(const std::string& object) const;
  /// Names of the members of a group, sorted as text. Throws file_damaged beyond 100,000 names.
  std::vector<std::string> children(const std::string& group) const;

  bool has_attribute(const std::string& object, const std::string& name) const;
  /// Attribute as numbers (any integer or float type, scalar or array, at most 4096 elements); empty if absent.
  /// Throws item_wrong_type for text, item_wrong_size beyond the limit, item_bad_value for NaN or infinity.
  std::optional<std::vector<double>> numbers(const std::string& object, const std::string& name) const;
  /// The same for exactly one element.
  std::optional<double> number(const std::string& object, const std::string& name) const;
  /// Attribute as text (fixed or variable length, NUL or space padded, scalar or one element); empty if absent or not text.
  std::optional<std::string> text(const std::string& object, const std::string& name) const;
  /// Names of the attributes of an object, at most 1000.
  std::vector<std::string> attribute_names(const std::string& object) const;

  hid_t id() const noexcept { return file_.get(); }
  /// Access list for opening links, which keeps links to other files from being followed.
  hid_t link_access() const noexcept { return link_access_.get(); }

 private:
  Handle open_attribute(hid_t object, const std::string& object_path, const std::string& name) const;
  void refuse_foreign_link(const std::string& prefix) const;
  bool resolves(const std::string& object) const;

  std::string path_;
  bool allow_external_;
  Handle link_access_, file_;
};

}  // namespace farsum::io::hdf5
