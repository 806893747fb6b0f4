#include "fmm/verification/sample_choice.hpp"

#include <algorithm>
#include <numeric>

namespace farsum {
namespace {

/// Finaliser of the splitmix64 generator (Steele, Lea, Flood 2014): a fixed well-mixed function of the slice number.
std::uint64_t mix(std::uint64_t v) {
  v += 0x9e3779b97f4a7c15u;
  v = (v ^ v >> 30) * 0xbf58476d1ce4e5b9u;
  v = (v ^ v >> 27) * 0x94d049bb133111ebu;
  return v ^ v >> 31;
}

/// Number in [0, 1) for a slice.
double chance(std::uint64_t slice) {
  return double(mix(slice) >> 11) * 0x1p-53;
}

/// Adds to the probabilities of places [begin, end) what a weight contributes: share * weight / sum.
void add_share(const std::uint32_t* begin, const std::uint32_t* end, const std::vector<float>& weight, double share,
               std::vector<double>& probability) {
  double sum = 0;
  for (const std::uint32_t* place = begin; place != end; ++place) sum += double(weight[*place]);
  for (std::size_t i = 0; i < probability.size(); ++i)
    probability[i] += sum > 0 ? share * double(weight[begin[i]]) / sum : share / double(probability.size());
}

/// Draws one of the places [begin, end): one part by chance, one part by each weight.
Sample draw(const std::uint32_t* begin, const std::uint32_t* end, std::uint64_t slice, const std::vector<float>& absolute,
            const std::vector<float>& relative) {
  const double parts = 1.0 + (absolute.empty() ? 0 : 1) + (relative.empty() ? 0 : 1), n = double(end - begin);
  std::vector<double> probability(std::size_t(end - begin), 1 / (parts * n));
  if (!absolute.empty()) add_share(begin, end, absolute, 1 / parts, probability);
  if (!relative.empty()) add_share(begin, end, relative, 1 / parts, probability);
  double reached = 0;
  const double wanted = chance(slice);
  std::size_t i = 0;
  while (i + 1 < probability.size() && (reached += probability[i]) <= wanted) ++i;
  return {begin[i], 1 / probability[i], false};
}

/// Moves the `wanted` entries that come first in `before` to the front of [begin, end); ties by place.
template <class Before>
void take_first(std::vector<std::uint32_t>::iterator begin, std::vector<std::uint32_t>::iterator end, std::size_t wanted,
                Before before) {
  std::nth_element(begin, begin + std::ptrdiff_t(wanted), end, before);
}

}  // namespace

std::vector<Sample> choose_samples(std::uint32_t n, std::size_t wanted, const std::function<double(std::uint32_t)>& strength,
                                   const double* nearest_squared, const std::vector<float>& absolute,
                                   const std::vector<float>& relative) {
  std::vector<Sample> samples;
  if (n <= wanted) {
    for (std::uint32_t place = 0; place < n; ++place) samples.push_back({place, 1.0, true});
    return samples;
  }
  const std::size_t quarter = wanted / 4, slices = wanted - 2 * quarter;
  std::vector<std::uint32_t> places(n);
  std::iota(places.begin(), places.end(), 0u);
  std::vector<double> key(n);
  for (std::uint32_t place = 0; place < n; ++place) key[place] = strength(place);
  take_first(places.begin(), places.end(), quarter,
             [&](std::uint32_t a, std::uint32_t b) { return key[a] != key[b] ? key[a] > key[b] : a < b; });
  take_first(places.begin() + std::ptrdiff_t(quarter), places.end(), quarter, [&](std::uint32_t a, std::uint32_t b) {
    return nearest_squared[a] != nearest_squared[b] ? nearest_squared[a] < nearest_squared[b] : a < b;
  });
  for (std::size_t s = 0; s < 2 * quarter; ++s) samples.push_back({places[s], 1.0, true});
  std::sort(places.begin() + std::ptrdiff_t(2 * quarter), places.end());
  const std::size_t rest = n - 2 * quarter;
  for (std::size_t s = 0; s < slices; ++s) {
    const std::size_t begin = rest * s / slices, end = rest * (s + 1) / slices;
    if (begin != end) samples.push_back(draw(&places[2 * quarter] + begin, &places[2 * quarter] + end, s, absolute, relative));
  }
  return samples;
}

}  // namespace farsum
