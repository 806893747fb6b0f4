// The command farsum: potentials, fields, forces and energies of point charges from particle files.
#include <fmt/format.h>

#include <CLI/CLI.hpp>
#include <cstdio>
#include <exception>
#include <string>

#include "apps/farsum/run.hpp"
#include "apps/farsum/signals.hpp"
#include "apps/farsum/subcommands.hpp"

namespace {

using farsum::command::report_usage_error;

constexpr const char* kDescription =
    "farsum - electrostatic potential, field, force and energy of millions of point charges,\n"
    "to an error that you name and the program measures.";

constexpr const char* kFooter =
    "First steps:\n"
    "  farsum generate proton_bunch bunch.h5        make demonstration charges\n"
    "  farsum info bunch.h5                         see what a file holds\n"
    "  farsum solve bunch.h5 -o result.h5           potential, field, force, energy at every charge\n"
    "  farsum verify bunch.h5 result.h5             check the result against direct sums\n\n"
    "Particle files are openPMD (HDF5) or text with a header line. Results are in SI units: V, V/m, N, J.\n"
    "Potential is zero at infinity; the sums are those of charges at rest in open space.\n\n"
    "Cautions: high voltage, ionising radiation and vacuum hazards are not modelled; results of an\n"
    "idealised model do not replace local safety codes and licensed practice.\n\n"
    "Exit status: 0 done, 1 failed, 2 wrong usage, 3 accuracy asked for not reached,\n"
    "4 refused for memory, 128+n ended by signal n.\n";

/// Name of the subcommand on the command line, for the hint after a usage error.
std::string chosen_subcommand(const CLI::App& app) {
  const auto chosen = app.get_subcommands();
  return chosen.empty() ? std::string() : chosen.front()->get_name();
}

int parse_and_run(CLI::App& app, int argc, char** argv, const int& status) {
  try {
    app.parse(argc, argv);
    return status;
  } catch (const CLI::CallForHelp&) {
    const auto chosen = app.get_subcommands();
    fmt::print("{}", chosen.empty() ? app.help() : chosen.front()->help());
  } catch (const CLI::CallForVersion&) {
    fmt::print("farsum {}\n", FARSUM_VERSION);
  } catch (const CLI::ParseError& error) {
    return report_usage_error(error.what(), chosen_subcommand(app));
  }
  return std::fflush(stdout) == 0 ? 0 : 1;
}

}  // namespace

int main(int argc, char** argv) {
  using namespace farsum::command;
  install_signal_handlers();
  try {
    CLI::App app(kDescription, "farsum");
    app.set_version_flag("--version", FARSUM_VERSION, "Show the version and end.");
    app.set_help_flag("--help,-h", "Show this help and end.");
    app.get_formatter()->column_width(30);
    app.require_subcommand(1);
    app.footer(kFooter);
    int status = 0;
    add_generate(app, status);
    add_info(app, status);
    add_solve(app, status);
    add_verify(app, status);
    return parse_and_run(app, argc, argv, status);
  } catch (const std::exception& error) {
    fmt::print(stderr, "farsum: unexpected failure: {}\n", error.what());
    return 1;
  }
}
