// The command farsum: potentials, fields, forces and energies of point charges from particle files.
#include <fmt/format.h>

#include <CLI/CLI.hpp>
#include <algorithm>
#include <cstdio>
#include <exception>
#include <string>
#include <vector>

#include "apps/farsum/display.hpp"
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

std::vector<std::string> subcommand_names(const CLI::App& app) {
  std::vector<std::string> names;
  for (const CLI::App* sub : app.get_subcommands([](const CLI::App*) { return true; })) names.push_back(sub->get_name());
  return names;
}

/// What is wrong with the first word, or nothing: the library only says that a subcommand is missing.
std::string first_word_fault(const CLI::App& app, int argc, char** argv) {
  const std::vector<std::string> names = subcommand_names(app);
  const std::string choice = farsum::command::joined(names);
  if (argc < 2) return fmt::format("a subcommand is missing; choose one of {}", choice);
  const std::string word = argv[1];
  if (word.rfind('-', 0) == 0 || std::find(names.begin(), names.end(), word) != names.end()) return {};
  return fmt::format("there is no subcommand '{}'; choose one of {}", word, choice);
}

int parse_and_run(CLI::App& app, int argc, char** argv, const int& status) {
  const std::string fault = first_word_fault(app, argc, argv);
  if (!fault.empty()) return report_usage_error(fault, {});
  try {
    app.parse(argc, argv);
    return status;
  } catch (const CLI::CallForHelp&) {
    const auto chosen = app.get_subcommands();
    fmt::print("{}", chosen.empty() ? app.help() : chosen.front()->help("farsum"));
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
