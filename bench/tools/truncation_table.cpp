// Measures how large the error of a truncated multipole-to-local translation is, and prints the table of
// fmm/medium/coulomb/truncation_table.hpp: for each squared centre distance 4..27 of far box pairs and each order 0..48 the RMS
// potential and field error as -log2, for sources of sum q^2 = 1 at random places of a cube of side one and random targets in
// another. Run: truncation_table > fmm/medium/coulomb/truncation_table.hpp   (about a minute; fixed seed)
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <map>
#include <random>
#include <vector>

#include "fmm/base/aligned_array.hpp"
#include "fmm/expansion/gradient.hpp"
#include "fmm/expansion/translation.hpp"
#include "fmm/kernels/dispatch.hpp"

namespace {

using farsum::kMaxOrder;
constexpr std::size_t kPoints = 64;
constexpr int kTrials = 400;

struct Squares {
  double potential[kMaxOrder + 1] = {}, field[kMaxOrder + 1] = {};
};

struct Cloud {
  std::vector<double> x, y, z, q;
  explicit Cloud(std::mt19937_64& random) {
    // Own conversion to [-1/2, 1/2): the same numbers from every standard library.
    const auto uniform = [&] { return double(random() >> 11) * 0x1p-53 - 0.5; };
    for (std::size_t i = 0; i < kPoints; ++i) {
      x.push_back(uniform());
      y.push_back(uniform());
      z.push_back(uniform());
      q.push_back((random() >> 63 ? 1.0 : -1.0) / std::sqrt(double(kPoints)));
    }
  }
  farsum::kernels::PointBlock<double> block() const { return {x.data(), y.data(), z.data(), q.data(), kPoints}; }
};

struct Exact {
  double potential = 0, field[3] = {0, 0, 0};
};

Exact exact_at(const Cloud& sources, const farsum::BoxOffset& o, double tx, double ty, double tz) {
  long double sum = 0, f[3] = {0, 0, 0};
  for (std::size_t j = 0; j < kPoints; ++j) {
    const long double dx = (long double)(tx)-sources.x[j] - o.x, dy = (long double)(ty)-sources.y[j] - o.y,
                      dz = (long double)(tz)-sources.z[j] - o.z;
    const long double w = 1 / std::sqrt(dx * dx + dy * dy + dz * dz), w3 = sources.q[j] * w * w * w;
    sum += sources.q[j] * w;
    f[0] += w3 * dx;
    f[1] += w3 * dy;
    f[2] += w3 * dz;
  }
  return {double(sum), {double(f[0]), double(f[1]), double(f[2])}};
}

class Measurement {
 public:
  explicit Measurement(farsum::Executor& executor)
      : tables_(kMaxOrder, executor),
        gradients_(kMaxOrder),
        scratch_(ledger_, farsum::kernels::expansion_scratch(kMaxOrder + 1)) {}

  void add_trial(const Cloud& sources, const Cloud& targets, const farsum::BoxOffset& o, Squares& squares) {
    const auto& kernels = farsum::kernels::kernel_table(farsum::CpuTarget::portable).double_precision;
    std::vector<double> multipole(farsum::row_length<double>(kMaxOrder), 0.0);
    kernels.project(sources.block(), kMaxOrder, false, tables_.recurrence(), multipole.data(), scratch_.data());
    std::vector<Exact> exact;
    for (std::size_t i = 0; i < kPoints; ++i) exact.push_back(exact_at(sources, o, targets.x[i], targets.y[i], targets.z[i]));
    for (int p = 0; p <= kMaxOrder; ++p) add_order(multipole, targets, o, p, exact, squares);
  }

 private:
  void add_order(const std::vector<double>& multipole, const Cloud& targets, const farsum::BoxOffset& o, int p,
                 const std::vector<Exact>& exact, Squares& squares) {
    const auto& kernels = farsum::kernels::kernel_table(farsum::CpuTarget::portable).double_precision;
    const std::size_t length = farsum::row_length<double>(p);
    std::vector<double> rows(4 * length, 0.0), values(4 * kPoints);
    double* const r[4] = {&rows[0], &rows[length], &rows[2 * length], &rows[3 * length]};
    double* const v[4] = {&values[0], &values[kPoints], &values[2 * kPoints], &values[3 * kPoints]};
    const double* source = multipole.data();
    kernels.translate(tables_.far(farsum::offset_index(o), p), &source, &r[0], 1, scratch_.data());
    gradients_.of_local(r[0], p, {r[1], r[2], r[3]});
    kernels.evaluate(targets.block(), p, false, tables_.recurrence(), r, 4, v);
    for (std::size_t i = 0; i < kPoints; ++i) {
      squares.potential[p] += (v[0][i] - exact[i].potential) * (v[0][i] - exact[i].potential);
      for (int axis = 0; axis < 3; ++axis)
        squares.field[p] += (v[axis + 1][i] + exact[i].field[axis]) * (v[axis + 1][i] + exact[i].field[axis]);
    }
  }

  farsum::TranslationTables<double> tables_;
  farsum::GradientRows<double> gradients_;
  farsum::MemoryLedger ledger_;
  farsum::AlignedArray<double> scratch_;
};

/// -log2 of the RMS, continued by its last clear slope where rounding takes over.
void print_row(const double* squares, double count) {
  constexpr double kRoundingOctaves = 45;
  std::vector<double> octaves;
  for (int p = 0; p <= kMaxOrder; ++p) {
    double value = -0.5 * std::log2(squares[p] / count);
    if (p > 8 && (value > kRoundingOctaves || octaves.back() > kRoundingOctaves))
      value = octaves.back() + (octaves[octaves.size() - 1] - octaves[octaves.size() - 7]) / 6;
    // The sample of rare corner pairs makes single values uneven: an order is never worse than the one before.
    if (p > 0) value = std::fmax(value, octaves.back());
    octaves.push_back(value);
  }
  std::printf("     {");
  for (int p = 0; p <= kMaxOrder; ++p)
    std::printf("%.1ff%s", octaves[std::size_t(p)], p == kMaxOrder ? "}" : p % 14 == 13 ? ",\n      " : ", ");
}

}  // namespace

int main() {
  farsum::Executor executor(0);
  Measurement measurement(executor);
  // All offsets of a squared distance, up to symmetry: components in falling order.
  std::map<int, std::vector<farsum::BoxOffset>> classes;
  for (int x = 0; x <= 3; ++x)
    for (int y = 0; y <= x; ++y)
      for (int z = 0; z <= y; ++z)
        if (const farsum::BoxOffset o{x, y, z}; !o.near()) classes[o.squared()].push_back(o);
  std::printf(
      "#pragma once\n// clang-format off\n// Made by bench/tools/truncation_table.cpp (%d trials of %zu charges and targets "
      "per offset); see truncation.hpp.\n\n",
      kTrials, kPoints);
  std::printf(
      "namespace farsum::coulomb {\n\nstruct TruncationRow {\n  int squared_distance;\n  float potential[%d], field[%d];   "
      "///< -log2 of the RMS error, by order\n};\n\n",
      kMaxOrder + 1, kMaxOrder + 1);
  std::printf("inline constexpr TruncationRow kTruncationRows[] = {\n");
  for (const auto& [squared, offsets] : classes) {
    Squares worst;
    for (const farsum::BoxOffset& o : offsets) {
      std::mt19937_64 random(std::uint64_t(squared) * 64 + std::uint64_t(o.x * 16 + o.y * 4 + o.z));
      Squares squares;
      for (int trial = 0; trial < kTrials; ++trial) {
        const Cloud sources(random), targets(random);
        measurement.add_trial(sources, targets, o, squares);
      }
      for (int p = 0; p <= kMaxOrder; ++p) {
        worst.potential[p] = std::fmax(worst.potential[p], squares.potential[p]);
        worst.field[p] = std::fmax(worst.field[p], squares.field[p]);
      }
    }
    std::printf("    {%d,\n", squared);
    print_row(worst.potential, double(kTrials) * kPoints);
    std::printf(",\n");
    print_row(worst.field, double(kTrials) * kPoints);
    std::printf("},\n");
  }
  std::printf("};\n\n}  // namespace farsum::coulomb\n");
}
