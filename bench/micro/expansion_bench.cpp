// Kernels of the far field, every CPU target, float and double: harmonics of points (P2M, L2P) and translations (M2L, M2M).
// Counters: points/s or translations/s.
#include <benchmark/benchmark.h>

#include <random>
#include <string>
#include <vector>

#include "fmm/base/aligned_array.hpp"
#include "fmm/base/cpu.hpp"
#include "fmm/expansion/translation.hpp"
#include "fmm/kernels/dispatch.hpp"
#include "fmm/parallel/executor.hpp"

namespace farsum {
namespace {

constexpr std::size_t kPoints = 64;  // charges in a leaf
constexpr std::size_t kBoxes = 64;   // boxes that share an offset

/// Seeded rows of numbers between -0.5 and 0.5, each starting on a cache line.
template <class Real>
class Rows {
 public:
  Rows(std::size_t count, std::size_t length)
      : length_(round_up(length, kernels::kRealPad<Real>)), values_(ledger_, count * length_) {
    std::mt19937_64 engine(1);
    for (Real& value : values_) value = Real(engine() >> 40) / Real(1 << 24) - Real(0.5);
    for (std::size_t i = 0; i < count; ++i) pointers_.push_back(values_.data() + i * length_);
  }
  Real* operator[](std::size_t i) const { return pointers_[i]; }
  Real* const* all() const { return pointers_.data(); }

 private:
  MemoryLedger ledger_;
  std::size_t length_;
  AlignedArray<Real> values_;
  std::vector<Real*> pointers_;
};

void count_rate(benchmark::State& state, const char* name, std::size_t items) {
  state.counters[name] = benchmark::Counter(double(items), benchmark::Counter::kIsIterationInvariantRate);
}

template <class Real>
void run_projection(benchmark::State& state, CpuTarget target) {
  const int order = int(state.range(0));
  Executor executor(1);
  const TranslationTables<Real> tables(order, executor);
  const Rows<Real> columns(4, kPoints), row(1, row_length<Real>(order + 1)), scratch(1, kernels::expansion_scratch(order));
  const kernels::PointBlock<Real> points{columns[0], columns[1], columns[2], columns[3], kPoints};
  const auto& kernel = kernels::expansion_kernels<Real>(kernels::kernel_table(target));
  for (auto _ : state) {
    kernel.project(points, order, false, tables.recurrence(), row[0], scratch[0]);
    benchmark::ClobberMemory();
  }
  count_rate(state, "points/s", kPoints);
}

template <class Real>
void run_evaluation(benchmark::State& state, CpuTarget target) {
  const int order = int(state.range(0));
  Executor executor(1);
  const TranslationTables<Real> tables(order, executor);
  const Rows<Real> columns(4, kPoints), rows(4, row_length<Real>(order)), values(4, kPoints);
  const kernels::PointBlock<Real> points{columns[0], columns[1], columns[2], columns[3], kPoints};
  const auto& kernel = kernels::expansion_kernels<Real>(kernels::kernel_table(target));
  for (auto _ : state) {
    kernel.evaluate(points, order, false, tables.recurrence(), rows.all(), 4, values.all());
    benchmark::ClobberMemory();
  }
  count_rate(state, "points/s", kPoints);
}

template <class Real>
void run_translation(benchmark::State& state, CpuTarget target, bool far) {
  const int order = int(state.range(0));
  Executor executor(1);
  const TranslationTables<Real> tables(order, executor);
  const Rows<Real> from(kBoxes, row_length<Real>(order)), to(kBoxes, row_length<Real>(order));
  const Rows<Real> scratch(1, kernels::expansion_scratch(order));
  const kernels::Translation<Real> translation = far ? tables.far(offset_index({2, 1, -1}), order) : tables.child_to_parent(5);
  const auto& kernel = kernels::expansion_kernels<Real>(kernels::kernel_table(target));
  for (auto _ : state) {
    kernel.translate(translation, from.all(), to.all(), kBoxes, scratch[0]);
    benchmark::ClobberMemory();
  }
  count_rate(state, "translations/s", kBoxes);
}

template <class Real>
void register_kernels(CpuTarget target, const std::string& precision) {
  const std::string end = "/" + precision + "/" + cpu_target_name(target);
  const auto add = [&](const std::string& name, auto function) {
    benchmark::RegisterBenchmark((name + end).c_str(), function)->ArgName("order")->Arg(4)->Arg(8)->Arg(16)->Arg(24);
  };
  add("project", [=](benchmark::State& state) { run_projection<Real>(state, target); });
  add("evaluate", [=](benchmark::State& state) { run_evaluation<Real>(state, target); });
  add("translate/far", [=](benchmark::State& state) { run_translation<Real>(state, target, true); });
  add("translate/child_to_parent", [=](benchmark::State& state) { run_translation<Real>(state, target, false); });
}

}  // namespace
}  // namespace farsum

int main(int argc, char** argv) {
  using namespace farsum;
  benchmark::Initialize(&argc, argv);
  if (benchmark::ReportUnrecognizedArguments(argc, argv)) return 2;
  for (CpuTarget target : {CpuTarget::avx512, CpuTarget::avx2, CpuTarget::portable}) {
    if (!cpu_supports(target)) continue;
    register_kernels<float>(target, "float");
    register_kernels<double>(target, "double");
  }
  benchmark::RunSpecifiedBenchmarks();
  benchmark::Shutdown();
  return 0;
}
