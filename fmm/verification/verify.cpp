#include "fmm/verification/verify.hpp"

#include <algorithm>
#include <cmath>

#include "fmm/verification/error_norms.hpp"
#include "fmm/verification/sample_choice.hpp"

namespace farsum {
namespace {

/// Computed values of one target, brought back to scaled units.
struct Computed {
  double potential, field[3];
};

class Reader {
 public:
  explicit Reader(const VerifiedResult& r)
      : values_(r.values),
        index_(r.targets.index.data()),
        potential_(-r.potential_unit.exponent()),
        field_(-r.field_unit.exponent()) {}

  Computed at(std::uint32_t place) const {
    const std::ptrdiff_t i = std::ptrdiff_t(index_[place]) * values_.stride;
    Computed c{};
    if (values_.potential) c.potential = potential_(values_.potential[i]);
    if (values_.field_x) {
      c.field[0] = field_(values_.field_x[i]);
      c.field[1] = field_(values_.field_y[i]);
      c.field[2] = field_(values_.field_z[i]);
    }
    return c;
  }

  /// |E|^2, or |phi| where no field was computed.
  double strength(std::uint32_t place) const {
    const Computed c = at(place);
    return values_.field_x ? c.field[0] * c.field[0] + c.field[1] * c.field[1] + c.field[2] * c.field[2]
                           : std::abs(c.potential);
  }

 private:
  ResultView values_;
  const std::uint32_t* index_;
  PowerOfTwo potential_, field_;
};

/// By place, the expected squared error of an expansion, absolute and relative: (r / r_corner)^order, r the distance from the
/// centre of the target's leaf, and the mean squared potential of the leaf over the target's own. Empty without expansions.
struct ErrorWeights {
  std::vector<float> absolute, relative;
};

ErrorWeights error_weights(const Octree& targets, int order, const Reader& reader, bool with_potential, Executor& executor) {
  constexpr double kLargestRatio = 1e12;
  ErrorWeights weights;
  if (order == 0) return weights;
  weights.absolute.resize(targets.count);
  weights.relative.resize(targets.count);
  const auto size2 = [&](std::uint32_t k) {
    const Computed c = reader.at(k);
    return with_potential ? c.potential * c.potential
                          : c.field[0] * c.field[0] + c.field[1] * c.field[1] + c.field[2] * c.field[2];
  };
  executor.for_each(targets.boxes.size(), 64, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t b = begin; b < end; ++b) {
      const Box& box = targets.boxes[b];
      if (!box.leaf()) continue;
      const std::array<DoubleDouble, 3> centre = targets.frame.centre(box.place, box.level);
      const double corner2 = 0.75 * std::pow(targets.frame.box_side(box.level), 2);
      double mean2 = 0;
      for (std::uint32_t k = box.begin; k < box.end; ++k) {
        const double x = targets.x[k] - centre[0].high - centre[0].low, y = targets.y[k] - centre[1].high - centre[1].low,
                     z = targets.z[k] - centre[2].high - centre[2].low;
        weights.absolute[k] = float(std::pow((x * x + y * y + z * z) / corner2, 0.5 * order));
        mean2 += size2(k) / box.count();
      }
      for (std::uint32_t k = box.begin; k < box.end; ++k) {
        const double own = size2(k);
        weights.relative[k] = float(own * kLargestRatio > mean2 ? mean2 / own : kLargestRatio);
      }
    }
  });
  return weights;
}

bool within(const OutputError& error, double tolerance) {
  // Written so that a NaN counts as a miss.
  return !error.measured || (error.rms <= tolerance && error.typical <= 3 * tolerance);
}

SampledError potential_error(const Computed& c, const ExactValue& exact, double charge_rms, const Sample& sample) {
  const double nearest = std::sqrt(exact.nearest_squared);
  return {std::abs(c.potential - exact.potential),
          std::abs(exact.potential),
          charge_rms / nearest,
          exact.potential_scale,
          sample.weight,
          sample.certain};
}

SampledError field_error(const Computed& c, const ExactValue& exact, double charge_rms, const Sample& sample) {
  double error2 = 0, size2 = 0;
  for (int axis = 0; axis < 3; ++axis) {
    error2 += (c.field[axis] - exact.field[axis]) * (c.field[axis] - exact.field[axis]);
    size2 += exact.field[axis] * exact.field[axis];
  }
  return {std::sqrt(error2), std::sqrt(size2), charge_rms / exact.nearest_squared,
          exact.field_scale, sample.weight,    sample.certain};
}

}  // namespace

VerificationOutcome verify_result(const VerifiedResult& result, std::size_t wanted, double tolerance,
                                  const kernels::KernelTable& kernels, Executor& executor) {
  const Octree &sources = result.sources, &targets = result.targets;
  const Reader reader(result);
  const ErrorWeights weights = error_weights(targets, result.order, reader, result.values.potential != nullptr, executor);
  const std::vector<Sample> samples = choose_samples(
      std::uint32_t(targets.count), wanted, [&](std::uint32_t place) { return reader.strength(place); }, result.nearest_squared,
      weights.absolute, weights.relative);
  std::vector<ExactTarget> places;
  for (const Sample& s : samples)
    places.push_back(
        {targets.x[s.place], targets.y[s.place], targets.z[s.place], &sources == &targets ? std::int64_t(s.place) : -1});
  const std::vector<ExactValue> exact = exact_values(
      {sources.x.data(), sources.y.data(), sources.z.data(), result.charges, sources.count}, places, kernels, executor);

  std::vector<SampledError> potential, field;
  for (std::size_t i = 0; i < samples.size(); ++i) {
    const Computed c = reader.at(samples[i].place);
    if (result.values.potential) potential.push_back(potential_error(c, exact[i], result.charge_rms, samples[i]));
    if (result.values.field_x) field.push_back(field_error(c, exact[i], result.charge_rms, samples[i]));
  }
  VerificationOutcome outcome;
  ErrorMeasure& measure = outcome.measure;
  measure.samples = samples.size();
  const NormsResult of_potential = error_norms(potential), of_field = error_norms(field);
  if (result.values.potential) measure.potential = of_potential.error;
  if (result.values.field_x) measure.field = of_field.error;
  measure.met = within(measure.potential, tolerance) && within(measure.field, tolerance);
  measure.floor_tolerance = std::max(of_potential.floor_tolerance, of_field.floor_tolerance);
  outcome.field_median = of_field.median_size;
  return outcome;
}

}  // namespace farsum
