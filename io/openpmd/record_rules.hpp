#pragma once
// Rules for one species: its records, components, ids and patches.
#include <string>
#include <vector>

#include "fmm/error.hpp"
#include "io/findings.hpp"
#include "io/hdf5/input_file.hpp"
#include "io/openpmd/layout.hpp"

namespace farsum::io::openpmd {

/// Collects findings; errors thrown on the way become findings too. Stops adding after 1000.
class Findings {
 public:
  explicit Findings(std::vector<Finding>& list) : list_(list) {}
  void error(const char* rule, const std::string& item, const std::string& message) {
    add(Severity::error, rule, item, message);
  }
  void warning(const char* rule, const std::string& item, const std::string& message) {
    add(Severity::warning, rule, item, message);
  }

  template <class Check>
  void guarded(const std::string& item, Check&& check) {
    try {
      check();
    } catch (const Error& problem) {
      if (problem.code() == ErrorCode::file_unsafe || problem.code() == ErrorCode::cancelled) throw;
      error("readable", problem.item().empty() ? item : problem.item(), problem.message());
    }
  }

 private:
  void add(Severity severity, const char* rule, const std::string& item, const std::string& message) {
    if (list_.size() < 1000) list_.push_back({severity, rule, item, message});
  }
  std::vector<Finding>& list_;
};

void check_species(const hdf5::InputFile& file, const Layout& layout, const SpeciesPlace& place, Findings& findings);

}  // namespace farsum::io::openpmd
