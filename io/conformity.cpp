#include "io/conformity.hpp"

#include "fmm/error.hpp"
#include "io/openpmd/rules.hpp"
#include "io/particle_reader.hpp"

namespace farsum::io {

std::vector<Finding> check_conformity(const std::string& path, const ReadOptions& options) {
  ReadOptions first = options;
  first.iteration.reset();
  FileSummary summary;
  std::vector<Finding> findings;
  try {
    summary = inspect(path, first, Depth::counts);
  } catch (const Error& error) {
    // A file that opens but does not read still gets its rules checked.
    const ErrorCode code = error.code();
    if (code < ErrorCode::format_unsupported || code > ErrorCode::not_a_snapshot) throw;
    findings.push_back({Severity::error, "readable", error.item(), error.message()});
    if (code == ErrorCode::format_unsupported) return findings;
  }
  if (summary.format == "delimited text") return findings;
  openpmd::check_rules(path, options, findings);
  return findings;
}

}  // namespace farsum::io
