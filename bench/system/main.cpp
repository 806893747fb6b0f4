// System benchmark: whole solves over charges x tolerance x input x threads in one table, direct summation beside them.
#include <fmt/core.h>

#include <CLI/CLI.hpp>
#include <algorithm>
#include <exception>
#include <string>
#include <thread>
#include <vector>

#include "bench/system/inputs.hpp"
#include "bench/system/measure.hpp"
#include "bench/system/table.hpp"

namespace {

using farsum::Method;
using farsum::bench::Case;

struct Settings {
  std::vector<std::size_t> counts;
  std::vector<double> tolerances;
  std::vector<std::string> inputs;
  std::vector<int> threads;
  std::string signs = "one";
  std::string method = "auto";
  std::size_t largest = 1000000;
  int repeats = 3;

  bool chosen() const { return !(counts.empty() && tolerances.empty() && inputs.empty() && threads.empty()); }
};

int all_threads() {
  return std::max(1, int(std::thread::hardware_concurrency()));
}

/// Every combination of what was named on the command line.
std::vector<Case> chosen_cases(Settings s) {
  if (s.counts.empty()) s.counts = {s.largest};
  if (s.tolerances.empty()) s.tolerances = {1e-6};
  if (s.inputs.empty()) s.inputs = {"cube"};
  if (s.threads.empty()) s.threads = {all_threads()};
  const Method method = s.method == "direct" ? Method::direct : s.method == "tree" ? Method::tree : Method::automatic;
  std::vector<Case> cases;
  for (const std::string& input : s.inputs)
    for (bool both : {false, true})
      for (std::size_t count : s.counts)
        for (double tolerance : s.tolerances)
          for (int threads : s.threads)
            if (s.signs == "each" || both == (s.signs == "both"))
              cases.push_back({input, both, count, tolerance, threads, method});
  return cases;
}

/// The standard table: tolerances and threads on the cube, sizes, every input with one sign and both, and small sums both ways.
std::vector<Case> standard_cases(std::size_t largest) {
  const int all = all_threads();
  std::vector<Case> cases;
  for (double tolerance : {1e-3, 1e-6, 1e-9, 1e-12}) {
    cases.push_back({"cube", false, largest, tolerance, 1, Method::automatic});
    if (all > 1) cases.push_back({"cube", false, largest, tolerance, all, Method::automatic});
  }
  for (std::size_t part : {100, 32, 10, 3}) cases.push_back({"cube", false, largest / part, 1e-6, 1, Method::automatic});
  for (const std::string& input : farsum::bench::input_names())
    for (bool both : {false, true}) cases.push_back({input, both, largest, 1e-6, all, Method::automatic});
  for (std::size_t count : {500, 1000, 2000, 4000, 8000, 16000})
    for (Method method : {Method::automatic, Method::direct}) cases.push_back({"cube", false, count, 1e-6, 1, method});
  return cases;
}

void add_options(CLI::App& app, Settings& s) {
  app.add_option("--charges", s.counts, "numbers of charges")->delimiter(',');
  app.add_option("--tolerances", s.tolerances, "tolerances")->delimiter(',');
  app.add_option("--inputs", s.inputs, "inputs")->delimiter(',')->check(CLI::IsMember(farsum::bench::input_names()));
  app.add_option("--threads", s.threads, "numbers of threads")->delimiter(',')->check(CLI::PositiveNumber);
  app.add_option("--signs", s.signs, "one, both or each")->check(CLI::IsMember({"one", "both", "each"}))->capture_default_str();
  app.add_option("--method", s.method, "auto, direct or tree")
      ->check(CLI::IsMember({"auto", "direct", "tree"}))
      ->capture_default_str();
  app.add_option("--largest", s.largest, "charges of the large rows of the standard table")->capture_default_str();
  app.add_option("--repeats", s.repeats, "solves a row; the median counts")->check(CLI::PositiveNumber)->capture_default_str();
}

}  // namespace

int main(int argc, char** argv) {
  CLI::App app("Times whole solves. Without a choice of charges, tolerances, inputs or threads: the standard table.");
  Settings settings;
  add_options(app, settings);
  CLI11_PARSE(app, argc, argv);
  try {
    farsum::bench::print_machine();
    farsum::bench::print_legend(settings.repeats);
    farsum::bench::print_header();
    for (const Case& item : settings.chosen() ? chosen_cases(settings) : standard_cases(settings.largest))
      farsum::bench::print_row(farsum::bench::run_case(item, settings.repeats));
  } catch (const std::exception& error) {
    fmt::print(stderr, "system_bench: {}\n", error.what());
    return 1;
  }
  return 0;
}
