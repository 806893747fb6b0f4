#include "apps/farsum/run.hpp"

#include <fmt/format.h>

#include <cerrno>
#include <cstdio>
#include <cstring>
#include <new>
#include <stdexcept>

#include "apps/farsum/display.hpp"
#include "apps/farsum/exit_status.hpp"
#include "apps/farsum/resources.hpp"

namespace farsum::command {
namespace {

constexpr double kShareOfFreeMemory = 0.8;
constexpr std::size_t kLongestMessage = 2000;
constexpr int kMostThreads = 4096;

struct Failure {
  std::string code, message, file, item, remedy, line;
  int status;
};

Failure describe(const Error& error, int status) {
  return {
      std::string(error_name(error.code())), error.message(), error.file(), error.item(), error.remedy(), error.what(), status};
}

/// The exception that is being handled, in words.
Failure current_failure() {
  try {
    throw;
  } catch (const UsageError& error) {
    return describe(error, kWrongUsage);
  } catch (const Error& error) {
    return describe(error, exit_status(error.code()));
  } catch (const std::bad_alloc&) {
    return describe(Error(ErrorCode::out_of_memory, "memory could not be allocated", "free some memory or take fewer charges"),
                    kMemoryRefused);
  } catch (const std::exception& error) {
    return describe(Error(ErrorCode::internal, fmt::format("unexpected failure: {}", error.what()), "please report this"),
                    kFailed);
  } catch (...) {
    return describe(Error(ErrorCode::internal, "unexpected failure of unknown kind", "please report this"), kFailed);
  }
}

int fail(Run& run, const Failure& failure) {
  run.progress().clear();
  run.report().set_failure(failure.code, failure.message, failure.file, failure.item, failure.remedy, failure.status);
  std::string line = printable(failure.line, kLongestMessage);
  if (!run.options().json.empty()) {
    try {
      write_report(run.report(), run.options().json);
    } catch (const std::exception&) {
      line += "; the report could not be written either";
    }
  }
  fmt::print(stderr, "farsum: {}\n", line);
  return failure.status;
}

/// The report and the summary must have arrived for the run to count as done.
void finish(Run& run) {
  run.progress().clear();
  run.report().set_done();
  run.report().json()["memory"]["peak_bytes"] = peak_resident_bytes();
  if (!run.options().json.empty()) write_report(run.report(), run.options().json);
  if (std::fflush(stdout) != 0)
    throw Error(ErrorCode::file_not_writable, fmt::format("cannot write ({})", std::strerror(errno)), "standard output", {},
                "check where standard output goes, or use --quiet");
}

std::uint64_t ceiling_of(const CommonOptions& options) {
  if (options.memory_limit.empty()) return std::uint64_t(kShareOfFreeMemory * double(free_memory()));
  try {
    return parse_size(options.memory_limit);
  } catch (const std::invalid_argument& error) {
    throw UsageError(fmt::format("--memory-limit: {}", error.what()));
  }
}

}  // namespace

void add_common_options(CLI::App& app, CommonOptions& options) {
  app.add_option("--threads", options.threads,
                 "Most threads to use. Default: every processor that this process may use\n"
                 "(affinity and container quota respected). Never changes a bit of the result.")
      ->type_name("N");
  app.add_option("--memory-limit", options.memory_limit,
                 "Refuse work that would need more memory, e.g. 4GiB or 500MB.\n"
                 "Default: 80 % of what is free to this process.")
      ->type_name("SIZE");
  app.add_option("--json", options.json, "Write a report with stable keys, also on failure; - is standard output.")
      ->type_name("FILE");
  app.add_flag("--quiet", options.quiet, "No summary and no progress; failures are still told.");
  app.add_flag("--overwrite", options.overwrite, "Replace files that exist.");
}

void add_tolerance_option(CLI::App& app, double& tolerance, const std::string& description) {
  app.add_option("--tolerance", tolerance, description)->type_name("T");
}

std::string help_footer(const std::string& examples) {
  return fmt::format(
      "Examples:\n{}\n"
      "Exit status:\n"
      "  0 done   1 failed   2 wrong usage   3 accuracy asked for not reached\n"
      "  4 refused for memory   128+n ended by signal n\n",
      examples);
}

Run::Run(const std::string& command, const CommonOptions& options)
    : options_(options), report_(command), progress_(!options.quiet) {}

void Run::prepare() {
  if (options_.threads < 0 || options_.threads > kMostThreads)
    throw UsageError(fmt::format("--threads: {} is not a number of threads between 1 and {}", options_.threads, kMostThreads));
  memory_ceiling_ = ceiling_of(options_);
}

void Run::say(const std::string& line) {
  if (options_.quiet) return;
  progress_.clear();
  fmt::print(options_.json == "-" ? stderr : stdout, "{}\n", line);
}

void Run::say_cautions() {
  for (const std::string& text : report_.warnings()) say("note: " + printable(text, kLongestMessage));
}

void Run::require_memory(std::uint64_t bytes, const std::string& purpose) const {
  if (bytes <= memory_ceiling_) return;
  const bool given = !options_.memory_limit.empty();
  throw Error(
      ErrorCode::memory_refused,
      fmt::format("{} need {} of memory, more than {}", purpose, byte_size(bytes),
                  given ? fmt::format("the limit of {}", byte_size(memory_ceiling_))
                        : fmt::format("the {} that this run may take (80 % of what is free)", byte_size(memory_ceiling_))),
      "take fewer charges or raise --memory-limit");
}

int run_guarded(const std::string& command, const CommonOptions& options, const std::function<void(Run&)>& body) {
  try {
    check_report_path(options.json, options.overwrite);
  } catch (...) {
    const Failure failure = current_failure();
    fmt::print(stderr, "farsum: {}\n", printable(failure.line, kLongestMessage));
    return failure.status;
  }
  Run run(command, options);
  try {
    run.prepare();
    body(run);
    finish(run);
    return kDone;
  } catch (...) {
    return fail(run, current_failure());
  }
}

int report_usage_error(const std::string& message, const std::string& command) {
  fmt::print(stderr, "farsum: {}; see 'farsum {}--help'\n", printable(message, kLongestMessage),
             command.empty() ? "" : command + " ");
  return kWrongUsage;
}

}  // namespace farsum::command
