#pragma once
// Settings that all writers share.
#include <string>
#include <vector>

#include "io/output_file.hpp"
#include "io/read_options.hpp"

namespace farsum::io {

struct WriteOptions {
  bool overwrite = false;
  std::vector<std::string> inputs;  ///< files that must not be the output
  TemporaryHook on_temporary;
  Hooks hooks;
  std::string software = "farsum", software_version;  ///< root attributes
  std::string author;                                 ///< root attribute; left out when empty
  std::string comment;                                ///< root attribute; left out when empty
};

}  // namespace farsum::io
