#include "fmm/schedule/survey.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

#include "fmm/base/padding.hpp"

namespace farsum {
namespace {

constexpr std::size_t kSurveyTargets = 32;  // 32 pairs a charge; medians of the field scale to about 20 %
constexpr std::size_t kPiece = 1 << 14;

struct Value {
  double potential = 0, x = 0, y = 0, z = 0, nearest = 1e300;
};

void add_piece(const EvaluationJob& job, std::size_t place, std::size_t begin, std::size_t end, Value& value) {
  const Octree &s = job.sources, &t = job.targets;
  // The kernel wants an even self index: pieces start at even places, a single odd target is left out by its zero distance.
  const bool inside = job.same_points() && place >= begin && place < end;
  const std::ptrdiff_t self = inside ? std::ptrdiff_t(place - begin) : -1;
  job.kernels.pair_sums(
      {s.x.data() + begin, s.y.data() + begin, s.z.data() + begin, job.charges + begin, round_up(end - begin, kSourcePad),
       &t.x[place], &t.y[place], &t.z[place], 1, self, &value.potential, &value.x, &value.y, &value.z, &value.nearest},
      kernels::RootAccuracy::fast, true, true);
}

std::vector<Value> values_at(const EvaluationJob& job, const std::vector<std::size_t>& places) {
  const std::size_t n = places.size(), sources = job.sources.count, pieces = (sources + kPiece - 1) / kPiece;
  std::vector<Value> parts(pieces * n), values(n);
  job.executor.for_each(pieces, 1, [&](std::size_t piece, std::size_t, int) {
    for (std::size_t t = 0; t < n; ++t)
      add_piece(job, places[t], piece * kPiece, std::min(sources, (piece + 1) * kPiece), parts[piece * n + t]);
  });
  for (std::size_t piece = 0; piece < pieces; ++piece)
    for (std::size_t t = 0; t < n; ++t) {
      const Value& part = parts[piece * n + t];
      values[t].potential += part.potential;
      values[t].x += part.x;
      values[t].y += part.y;
      values[t].z += part.z;
      values[t].nearest = std::min(values[t].nearest, part.nearest);
    }
  return values;
}

double median(std::vector<double> values) {
  const auto middle = values.begin() + std::ptrdiff_t(values.size() / 2);
  std::nth_element(values.begin(), middle, values.end());
  return *middle;
}

/// Error that meets both norms, for values |f_i| and the floor f0.
double allowed(const std::vector<double>& sizes, double f0) {
  double squares = 0, inverse_squares = 0;
  const double half = median(sizes);
  for (double f : sizes) {
    const double scale = std::max({f, half, f0});
    squares += f * f;
    inverse_squares += 1 / (scale * scale);
  }
  const double n = double(sizes.size());
  return std::min(std::max(std::sqrt(squares / n), f0), 3 * std::sqrt(n / inverse_squares));
}

}  // namespace

AllowedError survey(const EvaluationJob& job, double charge_rms) {
  const std::size_t n = job.targets.count, wanted = std::min(n, kSurveyTargets);
  std::vector<std::size_t> places;
  for (std::size_t i = 0; i < wanted; ++i) places.push_back((2 * i + 1) * n / (2 * wanted));
  std::vector<double> potentials, fields, potential_floors, field_floors;
  for (const Value& v : values_at(job, places)) {
    potentials.push_back(std::abs(v.potential));
    fields.push_back(std::sqrt(v.x * v.x + v.y * v.y + v.z * v.z));
    if (v.nearest == 0) continue;  // a target on a charge, or a pair that is refused later
    potential_floors.push_back(charge_rms / std::sqrt(v.nearest));
    field_floors.push_back(charge_rms / v.nearest);
  }
  if (field_floors.empty()) potential_floors = field_floors = {0.0};
  const double potential_floor = median(potential_floors), field_floor = median(field_floors);
  return {allowed(potentials, potential_floor), allowed(fields, field_floor), std::max(median(potentials), potential_floor),
          std::max(median(fields), field_floor)};
}

}  // namespace farsum
