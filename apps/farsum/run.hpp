#pragma once
// The frame around each subcommand: common options, where text goes, one message on failure, the report, the exit status.
#include <CLI/CLI.hpp>
#include <cstdint>
#include <functional>
#include <string>

#include "apps/farsum/progress.hpp"
#include "apps/farsum/run_report.hpp"

namespace farsum::command {

/// Options that every subcommand takes.
struct CommonOptions {
  int threads = 0;
  std::string memory_limit;  ///< as written, empty when not given
  std::string json;
  bool quiet = false;
  bool overwrite = false;
};

void add_common_options(CLI::App& app, CommonOptions& options);
void add_tolerance_option(CLI::App& app, double& tolerance, const std::string& description);

/// Examples and exit statuses below the options of a subcommand's help.
std::string help_footer(const std::string& examples);

/// What a subcommand has at hand while it runs.
class Run {
 public:
  Run(const std::string& command, const CommonOptions& options);
  /// Checks the common options and finds the memory ceiling. Throws UsageError.
  void prepare();

  const CommonOptions& options() const { return options_; }
  RunReport& report() { return report_; }
  Progress& progress() { return progress_; }

  /// A line of the summary: on standard output, or on standard error when standard output carries the report. Nothing when
  /// quiet.
  void say(const std::string& line);
  /// A caution: goes into the report and, as "note: ...", below the summary.
  void caution(const std::string& text) { report_.add_warning(text); }
  /// Prints the cautions that have come together.
  void say_cautions();

  /// Bytes that this run may take, from --memory-limit or 80 % of what is free.
  std::uint64_t memory_ceiling() const { return memory_ceiling_; }
  /// Throws Error(memory_refused) when `bytes` for `purpose` exceed the ceiling.
  void require_memory(std::uint64_t bytes, const std::string& purpose) const;

 private:
  const CommonOptions& options_;
  RunReport report_;
  Progress progress_;
  std::uint64_t memory_ceiling_ = 0;
};

/// Runs `body` and returns the exit status; every failure becomes one message on standard error and an entry in the report.
int run_guarded(const std::string& command, const CommonOptions& options, const std::function<void(Run&)>& body);

/// The message and status of a command line that cannot be understood.
int report_usage_error(const std::string& message, const std::string& command);

}  // namespace farsum::command
