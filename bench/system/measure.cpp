#include "bench/system/measure.hpp"

#include <algorithm>
#include <vector>

#include "bench/system/inputs.hpp"
#include "bench/yardstick/rates.hpp"
#include "fmm/error.hpp"
#include "fmm/solver.hpp"

namespace farsum::bench {
namespace {

constexpr std::uint64_t kSeed = 20240601;

Report solve_once(const Case& settings, const Charges& charges, std::vector<double> (&result)[4]) {
  Options options;
  options.tolerance = settings.tolerance;
  options.threads = settings.threads;
  options.method = settings.method;
  Solver solver(options);
  const std::size_t n = settings.count;
  solver.set_charges({charges.x.data(), charges.y.data(), charges.z.data(), n}, {charges.q.data(), n});
  solver.evaluate(Output::potential | Output::field, {result[0].data(), result[1].data(), result[2].data(), result[3].data()});
  return solver.report();
}

/// Best of the measurements so far: the rate of a core that nobody disturbs.
void update_rates(Row& row) {
  row.pair_rate = std::max(row.pair_rate, own_pair_rate(CpuTarget::automatic));
  row.yardstick_rate = std::max(row.yardstick_rate, yardstick_rate_double());
}

}  // namespace

double Row::work() const {
  return report.seconds.solve * double(settings.threads) * pair_rate / double(settings.count);
}

double Row::charges_per_second() const {
  return double(settings.count) / report.seconds.solve;
}

Row run_case(const Case& settings, int repeats) {
  Row row;
  row.settings = settings;
  const Charges charges = make_input(settings.input, settings.count, settings.both_signs, kSeed);
  std::vector<double> result[4];
  for (auto& column : result) column.resize(settings.count);
  std::vector<Report> reports;
  update_rates(row);
  try {
    for (int repeat = 0; repeat < repeats; ++repeat) {
      reports.push_back(solve_once(settings, charges, result));
      update_rates(row);
    }
  } catch (const Error& error) {
    row.failure = std::string(error_name(error.code()));
    return row;
  }
  std::sort(reports.begin(), reports.end(), [](const Report& a, const Report& b) { return a.seconds.solve < b.seconds.solve; });
  row.report = reports[reports.size() / 2];
  row.fastest = reports.front().seconds.solve;
  row.slowest = reports.back().seconds.solve;
  return row;
}

}  // namespace farsum::bench
