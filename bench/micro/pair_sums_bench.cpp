// Near-field and verification sums, every CPU target beside the yardstick. Counter pairs/s counts potential and field of one
// pair.
#include <benchmark/benchmark.h>

#include <random>
#include <string>
#include <vector>

#include "bench/yardstick/yardstick.hpp"
#include "fmm/base/cpu.hpp"
#include "fmm/kernels/dispatch.hpp"

namespace farsum {
namespace {

/// Seeded columns of numbers between 0 and 1.
template <class Real>
std::vector<std::vector<Real>> columns(std::size_t count, std::size_t length) {
  std::mt19937_64 engine(1);
  std::vector<std::vector<Real>> result(count, std::vector<Real>(length));
  for (auto& column : result)
    for (Real& value : column) value = Real(engine() >> 40) / Real(1 << 24);
  return result;
}

kernels::PairSums arguments_of(std::vector<std::vector<double>>& v, std::size_t points) {
  return {v[0].data(), v[1].data(), v[2].data(), v[3].data(), points,      v[4].data(),  v[5].data(), v[6].data(),
          points,      -1,          v[7].data(), v[8].data(), v[9].data(), v[10].data(), v[11].data()};
}

void count_pairs(benchmark::State& state, std::size_t points) {
  state.counters["pairs/s"] =
      benchmark::Counter(double(points) * double(points), benchmark::Counter::kIsIterationInvariantRate);
}

void run_pair_sums(benchmark::State& state, CpuTarget target, kernels::RootAccuracy accuracy, bool with_field) {
  const std::size_t points = std::size_t(state.range(0));
  auto v = columns<double>(12, points);
  const kernels::PairSums arguments = arguments_of(v, points);
  const kernels::KernelTable& table = kernels::kernel_table(target);
  for (auto _ : state) {
    table.pair_sums(arguments, accuracy, true, with_field);
    benchmark::ClobberMemory();
  }
  count_pairs(state, points);
}

void run_exact_sums(benchmark::State& state, CpuTarget target) {
  const std::size_t points = std::size_t(state.range(0));
  auto v = columns<double>(14, points);
  const kernels::ExactSums arguments{arguments_of(v, points), v[12].data(), v[13].data()};
  const kernels::KernelTable& table = kernels::kernel_table(target);
  for (auto _ : state) {
    table.exact_sums(arguments);
    benchmark::ClobberMemory();
  }
  count_pairs(state, points);
}

template <class Real>
void run_yardstick(benchmark::State& state) {
  const std::size_t points = std::size_t(state.range(0));
  auto v = columns<Real>(11, points);
  const Real* sources[4] = {v[0].data(), v[1].data(), v[2].data(), v[3].data()};
  const Real* targets[3] = {v[4].data(), v[5].data(), v[6].data()};
  Real* results[4] = {v[7].data(), v[8].data(), v[9].data(), v[10].data()};
  for (auto _ : state) {
    yardstick::pair_sums(sources, points, targets, points, results);
    benchmark::ClobberMemory();
  }
  count_pairs(state, points);
}

void register_target(CpuTarget target) {
  const std::string end = std::string("/") + cpu_target_name(target);
  const auto add = [&](const std::string& name, auto function) {
    benchmark::RegisterBenchmark((name + end).c_str(), function)->ArgName("points")->Arg(32)->Arg(64)->Arg(512);
  };
  using kernels::RootAccuracy;
  add("pair_sums/full/potential_and_field", [=](benchmark::State& s) { run_pair_sums(s, target, RootAccuracy::full, true); });
  add("pair_sums/fast/potential_and_field", [=](benchmark::State& s) { run_pair_sums(s, target, RootAccuracy::fast, true); });
  add("pair_sums/full/potential", [=](benchmark::State& s) { run_pair_sums(s, target, RootAccuracy::full, false); });
  add("pair_sums/fast/potential", [=](benchmark::State& s) { run_pair_sums(s, target, RootAccuracy::fast, false); });
  add("exact_sums", [=](benchmark::State& s) { run_exact_sums(s, target); });
}

}  // namespace
}  // namespace farsum

int main(int argc, char** argv) {
  using namespace farsum;
  benchmark::Initialize(&argc, argv);
  if (benchmark::ReportUnrecognizedArguments(argc, argv)) return 2;
  if (yardstick::available()) {
    benchmark::RegisterBenchmark("yardstick/double", &run_yardstick<double>)->ArgName("points")->Arg(32)->Arg(64)->Arg(512);
    benchmark::RegisterBenchmark("yardstick/float", &run_yardstick<float>)->ArgName("points")->Arg(32)->Arg(64)->Arg(512);
  }
  for (CpuTarget target : {CpuTarget::avx512, CpuTarget::avx2, CpuTarget::portable})
    if (cpu_supports(target)) register_target(target);
  benchmark::RunSpecifiedBenchmarks();
  benchmark::Shutdown();
  return 0;
}
