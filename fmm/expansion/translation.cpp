#include "fmm/expansion/translation.hpp"

#include <cmath>

#include "fmm/expansion/rotation.hpp"
#include "fmm/medium/coulomb/shifts.hpp"

namespace farsum {
namespace {

constexpr int kBlockRows = 4;  // the row blocks of kernels/body_translate.hpp

/// Appends a matrix in row blocks, each block column by column.
template <class Real, class Entry>
void append_blocks(std::vector<Real>& to, int rows, int columns, const Entry& entry) {
  for (int first = 0; first < rows; first += kBlockRows) {
    const int height = std::min(kBlockRows, rows - first);
    for (int column = 0; column < columns; ++column)
      for (int row = 0; row < height; ++row) to.push_back(Real(entry(first + row, column)));
  }
}

BoxOffset corner_of(int octant) {
  return {octant & 1 ? 1 : -1, octant & 2 ? 1 : -1, octant & 4 ? 1 : -1};
}

}  // namespace

template <class Real>
TranslationTables<Real>::TranslationTables(int order, Executor& executor, Separation separation)
    : order_(order), separation_(separation), directions_(kOffsets) {
  make_turns(executor);
  for (int index = 0; index < kOffsets; ++index)
    if (used(offset_of(index))) add_direction(directions_[std::size_t(index)], offset_of(index));
  make_scales();
  make_shifts();
  make_recurrence();
}

template <class Real>
bool TranslationTables<Real>::used(const BoxOffset& o) const {
  const bool corner = o.x * o.x == 1 && o.y * o.y == 1 && o.z * o.z == 1;
  return corner || separation_.occurs(o);
}

template <class Real>
void TranslationTables<Real>::make_turns(Executor& executor) {
  std::vector<std::pair<const std::pair<int, int>, Turn>*> wanted;
  for (int index = 0; index < kOffsets; ++index) {
    const BoxOffset o = offset_of(index);
    if (!used(o)) continue;
    const auto [place, fresh] = turns_.try_emplace({o.z, o.x * o.x + o.y * o.y});
    if (fresh && o.z >= 0) wanted.push_back(&*place);
  }
  // A direction below the plane z = 0 is its mirror image above, with mirrored harmonics: reflecting z turns R_nk into
  // (-1)^(n+k) R_nk, reflecting x turns the cosine part into (-1)^k R_nk and the sine part into (-1)^(k+1) R_nk.
  executor.for_each(wanted.size(), 1, [&](std::size_t i, std::size_t, int) {
    const auto [z, rho2] = wanted[i]->first;
    const long double length = std::sqrt((long double)(z * z + rho2));
    const AxisTurn axis_turn(order_, z / length, std::sqrt((long double)(rho2)) / length);
    append_turn(wanted[i]->second, [&](int n, int row, int column) { return axis_turn.entry(n, row, column); });
    if (z == 0) return;
    append_turn(turns_.at({-z, rho2}), [&](int n, int row, int column) {
      const bool odd = (n + row + column + (row < 0 ? 1 : 0)) % 2 != 0;
      return odd ? -axis_turn.entry(n, row, column) : axis_turn.entry(n, row, column);
    });
  });
}

template <class Real>
template <class Entry>
void TranslationTables<Real>::append_turn(Turn& turn, const Entry& entry) {
  for (int n = 0; n <= order_; ++n) {
    append_blocks(turn.forward, n + 1, n + 1, [&](int row, int column) { return entry(n, row, column); });
    append_blocks(turn.forward, n, n, [&](int row, int column) { return entry(n, -1 - row, -1 - column); });
    append_blocks(turn.back, n + 1, n + 1, [&](int row, int column) { return entry(n, column, row); });
    append_blocks(turn.back, n, n, [&](int row, int column) { return entry(n, -1 - column, -1 - row); });
  }
}

template <class Real>
void TranslationTables<Real>::add_direction(Direction& direction, const BoxOffset& o) {
  const int rho2 = o.x * o.x + o.y * o.y;
  const long double rho = std::sqrt((long double)(rho2));
  const long double cosine = rho2 ? o.x / rho : 1.0L, sine = rho2 ? o.y / rho : 0.0L;
  long double c = 1, s = 0;
  for (int m = 0; m <= order_; ++m) {
    direction.cos_m.push_back(Real(c));
    direction.sin_m.push_back(Real(s));
    const long double next = c * cosine - s * sine;
    s = s * cosine + c * sine;
    c = next;
  }
  direction.turn = &turns_.at({o.z, rho2});
}

template <class Real>
void TranslationTables<Real>::make_scales() {
  const auto powers = [&](std::vector<Real>& to, long double first, long double factor) {
    for (int n = 0; n <= order_; ++n, first *= factor) to.push_back(Real(first));
  };
  for (int squared = 4; squared <= 3 * kOffsetReach * kOffsetReach; ++squared) {
    const long double inverse = 1 / std::sqrt((long double)(squared));
    powers(far_scales_[squared].in, 1, inverse);
    powers(far_scales_[squared].out, inverse, inverse);
  }
  // A child has half the side: degree n of its multipole counts 2^-n in the parent's units, a local potential coefficient
  // 2^-(n+1).
  powers(up_scales_.in, 1, 1);
  powers(up_scales_.out, 1, 0.5L);
  powers(down_scales_.in, 0.5L, 0.5L);
  powers(down_scales_.out, 1, 1);
}

template <class Real>
void TranslationTables<Real>::make_shifts() {
  const coulomb::Shifts shifts(order_);
  far_shifts_.resize(std::size_t(order_) + 1);
  for (int p = 0; p <= order_; ++p)
    for (int m = 0; m <= p; ++m)
      append_blocks(far_shifts_[std::size_t(p)], p - m + 1, p - m + 1,
                    [&](int row, int column) { return shifts.far(m + row, m + column, m); });
  const long double distance = std::sqrt(3.0L) / 2;  // child centre from parent centre, in sides of the child
  for (int m = 0; m <= order_; ++m) {
    const int size = order_ - m + 1;
    append_blocks(up_shift_, size, size,
                  [&](int row, int column) { return shifts.child(m + row, m + column, m) * std::pow(distance, row - column); });
    append_blocks(down_shift_, size, size,
                  [&](int row, int column) { return shifts.child(m + column, m + row, m) * std::pow(distance, column - row); });
  }
}

template <class Real>
void TranslationTables<Real>::make_recurrence() {
  const int top = order_ + 1;  // one more for the derivatives of irregular harmonics
  recurrence_stride_ = std::size_t(2 * (top + 1));
  recurrence_.assign(recurrence_stride_ * std::size_t(top + 1), Real(0));
  for (int m = 0; m <= top; ++m) {
    Real* row = &recurrence_[std::size_t(m) * recurrence_stride_];
    if (m > 0) row[0] = Real(std::sqrt((2.0L * m - 1) / (2.0L * m) * (m == 1 ? 2 : 1)));
    for (int n = m + 1; n <= top; ++n) {
      const long double divisor = std::sqrt((long double)(n * n - m * m));
      row[2 * (n - m)] = Real((2 * n - 1) / divisor);
      row[2 * (n - m) + 1] = Real(std::sqrt((long double)((n - 1) * (n - 1) - m * m)) / divisor);
    }
  }
}

template <class Real>
kernels::Translation<Real> TranslationTables<Real>::translation(int offset, int order, const std::vector<Real>& shift,
                                                                const Scales& scales) const {
  const Direction& direction = directions_[std::size_t(offset)];
  return {
      order,        direction.cos_m.data(), direction.sin_m.data(), direction.turn->forward.data(), direction.turn->back.data(),
      shift.data(), scales.in.data(),       scales.out.data()};
}

template <class Real>
kernels::Translation<Real> TranslationTables<Real>::far(int offset, int order) const {
  return translation(offset, order, far_shifts_[std::size_t(order)], far_scales_.at(offset_of(offset).squared()));
}

template <class Real>
kernels::Translation<Real> TranslationTables<Real>::child_to_parent(int octant) const {
  return translation(offset_index(corner_of(octant)), order_, up_shift_, up_scales_);
}

template <class Real>
kernels::Translation<Real> TranslationTables<Real>::parent_to_child(int octant) const {
  return translation(offset_index(corner_of(octant)), order_, down_shift_, down_scales_);
}

template <class Real>
std::size_t TranslationTables<Real>::bytes() const noexcept {
  std::size_t reals = recurrence_.size() + up_shift_.size() + down_shift_.size();
  for (const auto& [key, turn] : turns_) reals += turn.forward.size() + turn.back.size();
  for (const std::vector<Real>& shift : far_shifts_) reals += shift.size();
  return reals * sizeof(Real);
}

template class TranslationTables<float>;
template class TranslationTables<double>;

}  // namespace farsum
