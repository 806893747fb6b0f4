#include "fmm/expansion/order_choice.hpp"

#include <algorithm>
#include <cmath>

#include "fmm/medium/coulomb/truncation.hpp"

namespace farsum {
namespace {

/// Orders above this are even numbers only, so that translations of one offset share their order more often.
constexpr int kEvenAbove = 4;

int rounded(int order) { return order > kEvenAbove ? std::min(kMaxOrder, order + order % 2) : std::max(kMinOrder, order); }

template <class Error>
std::uint8_t smallest_order(double allowed, const Error& error_at) {
  for (int p = kMinOrder; p <= kMaxOrder; ++p)
    if (error_at(p) <= allowed) return std::uint8_t(rounded(p));
  return std::uint8_t(kMaxOrder);
}

}  // namespace

OrderChoice::OrderChoice() {
  constexpr int kSquares[] = {4, 5, 6, 8, 9, 10, 11, 12, 13, 14, 17, 18, 19, 22, 27};   // of far offsets between children of neighbours
  for (int squared : kSquares) {
    const std::vector<coulomb::TruncationError> errors = coulomb::truncation_errors(kMaxOrder, squared);
    for (std::size_t s = 0; s < kSlots; ++s) {
      const double allowed = std::exp2(-double(s) / kStepsPerOctave);
      rows_[std::size_t(squared)].potential[s] = smallest_order(allowed, [&](int p) { return errors[std::size_t(p)].potential; });
      rows_[std::size_t(squared)].field[s] = smallest_order(allowed, [&](int p) { return errors[std::size_t(p)].field; });
    }
  }
}

}  // namespace farsum
