#pragma once
// Errors of farsum: one exception type that says what happened, where, and what to do about it.
// Every failure of the engine and of the file layer is thrown as farsum::Error; nothing prints, aborts or exits.
#include <cstdint>
#include <stdexcept>
#include <string>
#include <string_view>
#include <utility>

namespace farsum {

/// What went wrong. A number is never given a second meaning: new codes get new numbers.
enum class ErrorCode : int {
  // Use of the library (1..99).
  invalid_argument = 1,       ///< sizes, options or pointers that make no sense
  not_finite = 2,             ///< a coordinate or charge is NaN or infinite
  coincident_charges = 3,     ///< two charges at exactly the same place
  target_on_charge = 4,       ///< an evaluation point lies exactly on a charge
  range_exceeded = 5,         ///< extent / separation above 2^60, or a result outside the double range
  tolerance_unreachable = 6,  ///< the data cannot carry the tolerance in double precision
  accuracy_not_reached = 7,   ///< the measured error exceeds the tolerance after the retry
  memory_refused = 8,         ///< the predicted memory exceeds the ceiling
  cancelled = 9,              ///< the caller's callback asked to stop
  out_of_memory = 10,         ///< an allocation failed
  internal = 11,              ///< a broken invariant; please report
  // Files (100..199).
  file_not_found = 100,
  file_not_readable = 101,
  file_not_writable = 102,
  file_exists = 103,         ///< output exists and overwriting was not asked for
  file_damaged = 104,        ///< truncated, not HDF5, unreadable data
  file_unsafe = 105,         ///< external storage, foreign links or plug-in filters
  format_unsupported = 106,  ///< version or layout that is not read
  item_missing = 107,        ///< a data set, attribute or column is not there
  item_wrong_type = 108,
  item_wrong_size = 109,
  item_bad_value = 110,
  unit_unknown = 111,
  unit_wrong_dimension = 112,
  choice_needed = 113,   ///< several readings are possible; the caller must choose
  not_a_snapshot = 114,  ///< particles recorded at different times
  moving_frame = 115,    ///< charges move too fast for a static sum
  disk_full = 116,
};

/// Stable lower-case word for a code, for example "coincident_charges". Distinct for every code.
std::string_view error_name(ErrorCode code) noexcept;
/// One English sentence that says what the code means in general. Distinct for every code.
std::string_view error_meaning(ErrorCode code) noexcept;

/// The exception of the whole library. what() is one line: what, where and, when known, what to do.
class Error : public std::runtime_error {
 public:
  explicit Error(ErrorCode code, const std::string& message, std::string remedy = {})
      : Error(code, message, {}, {}, std::move(remedy)) {}
  /// `file` and `item` (data set, column, row) may be empty.
  Error(ErrorCode code, const std::string& message, std::string file, std::string item, std::string remedy)
      : std::runtime_error(compose(message, file, item, remedy)),
        code_(code),
        message_(message),
        file_(std::move(file)),
        item_(std::move(item)),
        remedy_(std::move(remedy)) {}

  ErrorCode code() const noexcept { return code_; }
  const std::string& message() const noexcept { return message_; }  ///< the bare fact
  const std::string& file() const noexcept { return file_; }
  const std::string& item() const noexcept { return item_; }
  const std::string& remedy() const noexcept { return remedy_; }

 private:
  static std::string compose(const std::string& message, const std::string& file, const std::string& item,
                             const std::string& remedy);
  ErrorCode code_;
  std::string message_, file_, item_, remedy_;
};

}  // namespace farsum
