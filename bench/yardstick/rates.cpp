#include "bench/yardstick/rates.hpp"

#include <algorithm>
#include <array>
#include <chrono>
#include <random>
#include <vector>

#include "bench/yardstick/yardstick.hpp"
#include "fmm/base/cpu.hpp"
#include "fmm/kernels/dispatch.hpp"

namespace farsum::bench {
namespace {

constexpr std::size_t kPoints = 512;  // sources and targets: all arrays together fit into the first-level cache
constexpr int kRuns = 7;
constexpr int kRepeatsPerRun = 40;  // about 5 ms a run on a fast core

/// Best rate in pairs a second of `kernel`, which forms kPoints x kPoints pairs.
template <class Kernel>
double best_rate(Kernel kernel) {
  double best = 0;
  kernel();
  for (int run = 0; run < kRuns; ++run) {
    const auto start = std::chrono::steady_clock::now();
    for (int repeat = 0; repeat < kRepeatsPerRun; ++repeat) kernel();
    const std::chrono::duration<double> seconds = std::chrono::steady_clock::now() - start;
    best = std::max(best, double(kRepeatsPerRun) * double(kPoints) * double(kPoints) / seconds.count());
  }
  return best;
}

template <class Real>
struct Arrays {
  std::array<std::vector<Real>, 12> values;
  Arrays() {
    std::mt19937_64 engine(1);
    for (std::vector<Real>& list : values) {
      list.resize(kPoints);
      for (Real& value : list) value = Real(engine() >> 40) / Real(1 << 24);
    }
  }
};

template <class Real>
double yardstick_rate() {
  if (!yardstick::available()) return 0;
  Arrays<Real> arrays;
  auto& v = arrays.values;
  const Real* sources[4] = {v[0].data(), v[1].data(), v[2].data(), v[3].data()};
  const Real* targets[3] = {v[4].data(), v[5].data(), v[6].data()};
  Real* results[4] = {v[7].data(), v[8].data(), v[9].data(), v[10].data()};
  return best_rate([&] { yardstick::pair_sums(sources, kPoints, targets, kPoints, results); });
}

}  // namespace

double own_pair_rate(CpuTarget target) {
  Arrays<double> arrays;
  auto& v = arrays.values;
  const kernels::PairSums arguments{v[0].data(), v[1].data(), v[2].data(), v[3].data(),  kPoints,
                                    v[4].data(), v[5].data(), v[6].data(), kPoints,      -1,
                                    v[7].data(), v[8].data(), v[9].data(), v[10].data(), v[11].data()};
  const kernels::KernelTable& table = kernels::kernel_table(resolve_cpu_target(target));
  return best_rate([&] { table.pair_sums(arguments, kernels::RootAccuracy::full, true, true); });
}

double yardstick_rate_double() {
  return yardstick_rate<double>();
}
double yardstick_rate_float() {
  return yardstick_rate<float>();
}

}  // namespace farsum::bench
