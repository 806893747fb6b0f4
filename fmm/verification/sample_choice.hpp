#pragma once
// Which targets are verified. Uniform sampling alone misses the error of heavy-tailed fields, so the targets of largest field
// and of nearest neighbour are always taken; the rest is one target per slice of the tree order. At high orders most of the
// error of an expansion sits in the few targets near the corners of their leaf, and relative errors are large where a value is
// small among larger ones: a slice draws a third by chance, a third by each of these, and every square is weighted by the
// inverse of its probability. The choice is a pure function of the data.
#include <cstdint>
#include <functional>
#include <vector>

namespace farsum {

/// A verified target: its place in the tree order, and the number of targets it stands for.
struct Sample {
  std::uint32_t place;
  double weight;
  bool certain;  ///< taken for its own sake, not as the representative of a slice
};

/// About `wanted` samples of n targets (all with weight 1 if n <= wanted): a quarter of largest strength, a quarter of smallest
/// nearest_squared, the rest from slices. strength(place) is |E|^2, or |phi| where no field was asked for. absolute and
/// relative are, by place, proportional to the squared absolute and relative error expected there (empty: not used).
std::vector<Sample> choose_samples(std::uint32_t n, std::size_t wanted, const std::function<double(std::uint32_t)>& strength,
                                   const double* nearest_squared, const std::vector<float>& absolute,
                                   const std::vector<float>& relative);

}  // namespace farsum
