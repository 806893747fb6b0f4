#pragma once
// What a check of a file found.
#include <string>

namespace farsum::io {

enum class Severity { error, warning };

struct Finding {
  Severity severity = Severity::error;
  std::string rule;     ///< stable word, for example "equal_lengths"
  std::string item;     ///< path in the file
  std::string message;  ///< what is wrong and what was expected
};

}  // namespace farsum::io
