#include "bench/system/table.hpp"

#include <fmt/core.h>

#include <cstdio>
#include <fstream>
#include <string>
#include <thread>

#include "bench/yardstick/rates.hpp"
#include "fmm/base/cpu.hpp"

namespace farsum::bench {
namespace {

std::string processor_name() {
  std::ifstream info("/proc/cpuinfo");
  for (std::string line; std::getline(info, line);)
    if (line.rfind("model name", 0) == 0) return line.substr(line.find(':') + 2);
  return "unknown";
}

double bytes_per_charge(const Row& row) {
  return double(row.report.memory.peak_bytes) / double(row.settings.count);
}

std::string plan_text(const Plan& plan) {
  if (plan.method != "tree") return plan.method;
  return fmt::format("p{} s{} d{} {}{}", plan.order, plan.leaf_capacity, plan.depth, plan.precision == "single" ? "f" : "d",
                     plan.attempts > 1 ? fmt::format(" x{}", plan.attempts) : "");
}

}  // namespace

void print_machine() {
  fmt::print("processor     {}\n", processor_name());
  fmt::print("threads       {} on this machine\n", std::thread::hardware_concurrency());
  fmt::print("kernels       {}\n", cpu_target_name(resolve_cpu_target(CpuTarget::automatic)));
  fmt::print("compiler      {}\n", FARSUM_BENCH_COMPILER);
  const double own = own_pair_rate(CpuTarget::automatic), plain = yardstick_rate_double();
  fmt::print("direct sum    {:.3g} pairs/s a core (potential and field, double)\n", own);
  if (plain > 0)
    fmt::print("yardstick     {:.3g} pairs/s a core (plain AVX-512 loop): direct sum / yardstick = {:.2f}\n", plain,
               own / plain);
  else
    fmt::print("yardstick     needs AVX-512, which this processor lacks\n");
}

void print_legend(int repeats) {
  fmt::print(
      "\nseconds: median of {} solves (spread = slowest / fastest), everything from charges in memory to results in memory;\n"
      "w = seconds x threads x R / N with R, the pair rate of the direct sum on one core, measured around each row;\n"
      "errors: rms and typical of potential and field (fmm/report.hpp) at the verified charges; plan: order p, leaf capacity "
      "s,\n"
      "depth d, far field in float (f) or double (d), attempts x. Potential and field, fixed seeds.\n\n",
      repeats);
}

void print_header() {
  fmt::print(
      "{:>9} {:>7} {:<9} {:>3} | {:>8} {:>6} {:>8} {:>8} {:>8} {:>8} | {:>9} {:>7} {:>6} {:>5} | {:>7} {:>7} {:>7} {:>7} {:>3} "
      "| {}\n",
      "charges", "t", "input", "thr", "solve s", "spread", "tree", "lists", "far", "near", "charges/s", "w", "R/1e9", "B/N",
      "rms phi", "typ phi", "rms E", "typ E", "met", "plan");
}

void print_row(const Row& row) {
  const Case& c = row.settings;
  fmt::print("{:>9} {:>7.0e} {:<9} {:>3} | ", c.count, c.tolerance, c.input + (c.both_signs ? "+-" : ""), c.threads);
  if (row.failure) {
    fmt::print("error: {}\n", *row.failure);
  } else {
    const PhaseSeconds& s = row.report.seconds;
    const ErrorMeasure& e = row.report.error;
    fmt::print("{:>8.5f} {:>6.2f} {:>8.5f} {:>8.5f} {:>8.5f} {:>8.5f} | ", s.solve, row.slowest / row.fastest, s.tree, s.lists,
               s.far, s.near);
    fmt::print("{:>9.3g} {:>7.0f} {:>6.2f} {:>5.0f} | ", row.charges_per_second(), row.work(), row.pair_rate * 1e-9,
               bytes_per_charge(row));
    fmt::print("{:>7.0e} {:>7.0e} {:>7.0e} {:>7.0e} {:>3} | {}\n", e.potential.rms, e.potential.typical, e.field.rms,
               e.field.typical, e.met ? "yes" : "NO", plan_text(row.report.plan));
  }
  std::fflush(stdout);
}

}  // namespace farsum::bench
