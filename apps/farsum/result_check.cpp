#include "apps/farsum/result_check.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>

#include "apps/farsum/display.hpp"
#include "fmm/error.hpp"
#include "fmm/solver.hpp"

namespace farsum::command {
namespace {

double* data_or_null(std::vector<double>& column) {
  return column.empty() ? nullptr : column.data();
}

ResultView view(io::ResultTable& table) {
  return {data_or_null(table.potential), data_or_null(table.field_x), data_or_null(table.field_y), data_or_null(table.field_z),
          1};
}

Output outputs_of(const io::ResultTable& table) {
  return (table.potential.empty() ? Output::none : Output::potential) | (table.has_field() ? Output::field : Output::none);
}

/// Values in engine units, in the order of the input.
void reorder(std::vector<double>& column, const CheckedResult& checked) {
  if (column.empty()) return;
  std::vector<double> ordered(checked.input.size());
  for (std::size_t i = 0; i < column.size(); ++i) ordered[checked.row[i]] = column[i] / checked.coulomb_constant;
  column.swap(ordered);
}

void require_all_rows(const CheckedResult& checked) {
  std::vector<bool> present(checked.input.size(), false);
  for (const std::size_t row : checked.row) present[row] = true;
  const auto missing = std::find(present.begin(), present.end(), false);
  if (missing == present.end() && checked.row.size() == checked.input.size()) return;
  throw Error(
      ErrorCode::item_wrong_size,
      fmt::format("holds {} of the {}", grouped(checked.row.size()), counted(checked.input.size(), "charge") + " of the input"),
      checked.result.particles.file, {}, "give the input that the result was made from, read with the same options");
}

/// Differences at one target.
struct Deviation {
  double error, size, natural;
};

double median(std::vector<double> values) {
  if (values.empty()) return 0;
  const auto middle = values.begin() + std::ptrdiff_t(values.size() / 2);
  std::nth_element(values.begin(), middle, values.end());
  return *middle;
}

/// The norms of fmm/report.hpp over equally weighted targets.
OutputError norms(const std::vector<Deviation>& deviations) {
  OutputError result;
  if (deviations.empty()) return result;
  std::vector<double> sizes, naturals;
  double error2 = 0, size2 = 0, worst = 0;
  for (const Deviation& d : deviations) {
    error2 += d.error * d.error;
    size2 += d.size * d.size;
    worst = std::max(worst, d.error);
    sizes.push_back(d.size);
    naturals.push_back(d.natural);
  }
  const double count = double(deviations.size()), f0 = median(naturals), middle = median(sizes);
  const double scale = std::max(std::sqrt(size2 / count), f0);
  double typical2 = 0;
  for (const Deviation& d : deviations) {
    const double own = std::max({d.size, middle, f0});
    if (d.error > 0) typical2 += (d.error / own) * (d.error / own);
  }
  result.measured = true;
  result.rms = error2 > 0 ? std::sqrt(error2 / count) / scale : 0;
  result.rms_upper = result.rms;
  result.typical = std::sqrt(typical2 / count);
  result.worst = worst > 0 ? worst / scale : 0;
  return result;
}

bool within(const OutputError& error, double tolerance) {
  return !error.measured || (error.rms <= tolerance && error.typical <= 3 * tolerance);
}

/// The acting charges and the sampled rows, as plain arrays.
struct Sums {
  std::vector<double> x, y, z, charge;
  std::vector<double> at_x, at_y, at_z;
  std::vector<std::size_t> result_row;
  std::vector<double> potential, field_x, field_y, field_z;
};

Sums gather(const CheckedResult& checked, const RowRoles& roles, std::size_t samples) {
  const io::ParticleSet& set = checked.input;
  Sums sums;
  for (const io::SpeciesRange& species : roles.acting)
    for (std::size_t i = species.begin; i < species.end; ++i) {
      sums.x.push_back(set.x[i]);
      sums.y.push_back(set.y[i]);
      sums.z.push_back(set.z[i]);
      sums.charge.push_back(set.charge[i]);
    }
  const std::size_t count = checked.row.size(), wanted = std::min(samples, count);
  for (std::size_t k = 0; k < wanted; ++k) {
    const std::size_t row = std::size_t((double(k) + 0.5) * double(count) / double(wanted));
    sums.result_row.push_back(std::min(row, count - 1));
    const std::size_t place = checked.row[sums.result_row.back()];
    sums.at_x.push_back(set.x[place]);
    sums.at_y.push_back(set.y[place]);
    sums.at_z.push_back(set.z[place]);
  }
  for (std::vector<double>* column : {&sums.potential, &sums.field_x, &sums.field_y, &sums.field_z}) column->resize(wanted);
  return sums;
}

/// Smallest nonzero squared distance from a sampled row to an acting charge.
double nearest_squared(const Sums& sums, std::size_t sample) {
  double nearest = HUGE_VAL;
  for (std::size_t j = 0; j < sums.x.size(); ++j) {
    const double dx = sums.at_x[sample] - sums.x[j], dy = sums.at_y[sample] - sums.y[j], dz = sums.at_z[sample] - sums.z[j];
    const double square = dx * dx + dy * dy + dz * dz;
    if (square > 0) nearest = std::min(nearest, square);
  }
  return nearest;
}

double rms_charge(const Sums& sums) {
  long double square = 0;
  for (const double q : sums.charge) square += static_cast<long double>(q) * q;
  return sums.charge.empty() ? 0 : std::sqrt(double(square / static_cast<long double>(sums.charge.size())));
}

double length(double x, double y, double z) {
  return std::sqrt(x * x + y * y + z * z);
}

}  // namespace

void require_finite_results(const io::ResultTable& result) {
  const std::array<std::pair<const char*, const std::vector<double>*>, 4> columns = {{{"potential", &result.potential},
                                                                                      {"electricField/x", &result.field_x},
                                                                                      {"electricField/y", &result.field_y},
                                                                                      {"electricField/z", &result.field_z}}};
  for (const auto& [name, column] : columns)
    for (std::size_t i = 0; i < column->size(); ++i)
      if (!std::isfinite((*column)[i]))
        throw Error(ErrorCode::not_finite, fmt::format("value {} is {}", i, (*column)[i]), result.particles.file, name,
                    "the result is damaged; solve again");
}

ErrorMeasure check_all_charges(CheckedResult& checked, const Options& options) {
  require_all_rows(checked);
  for (std::vector<double>* column :
       {&checked.result.potential, &checked.result.field_x, &checked.result.field_y, &checked.result.field_z})
    reorder(*column, checked);
  return measure_error(checked.input.points(), checked.input.charges(), outputs_of(checked.result), view(checked.result),
                       options);
}

ErrorMeasure check_limited(CheckedResult& checked, const RowRoles& roles, const Options& options) {
  Sums sums = gather(checked, roles, options.samples);
  Options exact = options;
  exact.tolerance = 1e-13;
  exact.method = Method::direct;
  exact.coincident = Coincident::skip;  // a row that acts itself is left out of its own sum
  exact.verification = Verification::never;
  Solver solver(exact);
  solver.set_charges({sums.x.data(), sums.y.data(), sums.z.data(), sums.x.size(), 1},
                     {sums.charge.data(), sums.charge.size(), 1});
  solver.evaluate_at({sums.at_x.data(), sums.at_y.data(), sums.at_z.data(), sums.at_x.size(), 1},
                     Output::potential | Output::field,
                     {sums.potential.data(), sums.field_x.data(), sums.field_y.data(), sums.field_z.data(), 1});
  const double k = checked.coulomb_constant, q = rms_charge(sums);
  const io::ResultTable& table = checked.result;
  std::vector<Deviation> potential, field;
  for (std::size_t s = 0; s < sums.result_row.size(); ++s) {
    const std::size_t row = sums.result_row[s];
    const double square = nearest_squared(sums, s);
    if (!table.potential.empty())
      potential.push_back(
          {std::abs(table.potential[row] / k - sums.potential[s]), std::abs(sums.potential[s]), q / std::sqrt(square)});
    if (table.has_field())
      field.push_back({length(table.field_x[row] / k - sums.field_x[s], table.field_y[row] / k - sums.field_y[s],
                              table.field_z[row] / k - sums.field_z[s]),
                       length(sums.field_x[s], sums.field_y[s], sums.field_z[s]), q / square});
  }
  ErrorMeasure measure;
  measure.potential = norms(potential);
  measure.field = norms(field);
  measure.samples = sums.result_row.size();
  measure.met = within(measure.potential, options.tolerance) && within(measure.field, options.tolerance);
  return measure;
}

EnergySum energy_sum(const CheckedResult& checked) {
  long double value = 0, scale = 0;
  const double* potential = data_or_null(checked.result.potential);
  for (std::size_t i = 0; potential && i < checked.input.size(); ++i) {
    const long double term = 0.5L * checked.input.charge[i] * potential[i] * checked.coulomb_constant;
    value += term;
    scale += std::abs(term);
  }
  return {double(value), double(scale)};
}

}  // namespace farsum::command
