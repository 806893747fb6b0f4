#pragma once
// Strength of every source box and error that every target box may bear: what the order of each translation is chosen from.
#include <vector>

#include "fmm/expansion/order_choice.hpp"
#include "fmm/schedule/evaluation_job.hpp"
#include "fmm/schedule/survey.hpp"
#include "fmm/traversal/interactions.hpp"

namespace farsum {

/// Base-2 logarithms, scaled units; see expansion/order_choice.hpp.
struct BoxAccuracy {
  /// Side by side, as one look-up of a source in random order needs all three.
  struct Source {
    float strength_potential, strength_field;
    float spread;  ///< octaves per degree, see TranslationDemand
  };
  std::vector<Source> sources;                            ///< by source box
  std::vector<float> bearable_potential, bearable_field;  ///< by target box
  std::vector<float> target_spread;                       ///< by target box
  float base_field = 0, base_potential = 0;               ///< what the survey alone allows

  std::size_t bytes() const noexcept { return sizeof(Source) * sources.size() + 3 * sizeof(float) * bearable_field.size(); }
  TranslationDemand demand(std::size_t target, std::size_t source) const noexcept {
    const Source& s = sources[source];
    return {s.strength_potential, s.strength_field, bearable_potential[target], bearable_field[target],
            s.spread + target_spread[target]};
  }
};

/// Fraction of the bearable error of a target that one translation may take.
inline constexpr double kErrorShare = 1.0 / 24;

/// For a tolerance. Where the field is stronger than elsewhere a target bears more: that strength is estimated from the total
/// charges of far boxes and from the density of the target's own neighbours.
BoxAccuracy box_accuracy(const EvaluationJob& job, const NearLists& near, const DirectRule& rule, const AllowedError& allowed,
                         double tolerance);

}  // namespace farsum
