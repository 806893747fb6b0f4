#pragma once
// The report of one run of the command as JSON. Every key is there in every report, also after a failure: values that are not
// known are null and numbers are finite. The keys keep their meaning; `report_version` grows when one changes.
#include <nlohmann/json.hpp>
#include <string>
#include <vector>

#include "fmm/error.hpp"
#include "fmm/report.hpp"

namespace farsum::command {

class RunReport {
 public:
  explicit RunReport(const std::string& command);

  /// The document, for values that only one subcommand knows.
  nlohmann::ordered_json& json() { return json_; }

  void set_input(const std::string& file, const std::string& iteration, const std::vector<std::string>& species);
  void set_number(const char* group, const char* key, double value);   ///< not finite: null
  void set_quantity(const char* key, double value, const char* unit);  ///< key.{value,unit}
  void set_errors(const ErrorMeasure& error);
  /// Everything that the engine tells about a solve except quantities that need units.
  void set_engine(const Report& report);
  void add_warning(const std::string& text);
  const std::vector<std::string>& warnings() const { return warnings_; }
  void set_failure(std::string_view code, const std::string& message, const std::string& file, const std::string& item,
                   const std::string& remedy, int exit_status);
  void set_done() { json_["status"] = "done"; }

  /// The document as text, names from files as valid UTF-8.
  std::string text() const;

 private:
  nlohmann::ordered_json json_;
  std::vector<std::string> warnings_;
};

/// Writes the report to `path` ("-" is standard output): a regular file is replaced atomically.
/// Throws Error(file_not_writable).
void write_report(const RunReport& report, const std::string& path);

/// Checks before the work that the report can go to `path`. A regular file there is replaced only when it is empty, an earlier
/// report, or `overwrite` is set.
/// Throws Error(file_exists, file_not_writable).
void check_report_path(const std::string& path, bool overwrite);

}  // namespace farsum::command
