#pragma once
// Each subcommand adds itself to the command line; its callback leaves the exit status in `status`.
#include <CLI/CLI.hpp>

namespace farsum::command {

void add_generate(CLI::App& app, int& status);
void add_info(CLI::App& app, int& status);
void add_solve(CLI::App& app, int& status);
void add_verify(CLI::App& app, int& status);

}  // namespace farsum::command
