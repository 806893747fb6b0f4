#pragma once
// How an input file is to be read: the options that info, solve and verify share.
#include <CLI/CLI.hpp>
#include <optional>
#include <string>

#include "io/read_options.hpp"

namespace farsum::command {

struct InputOptions {
  std::string iteration;
  std::string species;  ///< comma-separated, empty: all
  std::string length_unit, charge_unit;
  std::optional<double> particle_charge;  ///< elementary charges
  bool as_snapshot = false;
  std::optional<double> advance_to;  ///< s
};

void add_input_options(CLI::App& app, InputOptions& options);

/// Throws UsageError for options that contradict each other.
io::ReadOptions read_options(const InputOptions& options);

}  // namespace farsum::command
