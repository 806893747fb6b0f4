#pragma once
// Tables for the translation kernels: every offset between a box and its child, and between boxes of one level.
#include <array>
#include <cstdint>
#include <map>
#include <vector>

#include "fmm/domain/box_offset.hpp"
#include "fmm/expansion/indexing.hpp"
#include "fmm/kernels/kernel_table.hpp"
#include "fmm/parallel/executor.hpp"

namespace farsum {

/// All translations up to one order. Immutable after construction.
template <class Real>
class TranslationTables {
 public:
  TranslationTables(int order, Executor& executor, Separation separation = {});

  int order() const noexcept { return order_; }
  Separation separation() const noexcept { return separation_; }
  /// Multipole of a same-level source to local of the target, both in box units, with degrees up to `order` (<= order()).
  kernels::Translation<Real> far(int offset, int order) const;
  /// Multipole of the child `octant` to its parent; local of the parent to that child.
  kernels::Translation<Real> child_to_parent(int octant) const;
  kernels::Translation<Real> parent_to_child(int octant) const;
  /// Factors for harmonics up to degree order() + 1 (derivatives of irregular harmonics need one degree more).
  kernels::Recurrence<Real> recurrence() const { return {recurrence_.data(), recurrence_stride_}; }
  std::size_t bytes() const noexcept;

 private:
  struct Turn {
    std::vector<Real> forward, back;
  };
  struct Direction {
    std::vector<Real> cos_m, sin_m;
    const Turn* turn = nullptr;
  };
  struct Scales {
    std::vector<Real> in, out;
  };
  kernels::Translation<Real> translation(int offset, int order, const std::vector<Real>& shift, const Scales& scales) const;
  void make_turns(Executor& executor);
  template <class Entry>
  void append_turn(Turn& turn, const Entry& entry);
  void add_direction(Direction& direction, const BoxOffset& o);
  void make_scales();
  void make_shifts();
  void make_recurrence();

  bool used(const BoxOffset& o) const;

  int order_;
  Separation separation_;
  std::map<std::pair<int, int>, Turn> turns_;  ///< by (z, x^2 + y^2)
  std::vector<Direction> directions_;          ///< far offsets; the children use the corners (+-1, +-1, +-1)
  std::map<int, Scales> far_scales_;           ///< by squared distance
  std::vector<std::vector<Real>> far_shifts_;  ///< by order
  std::vector<Real> up_shift_, down_shift_;
  Scales up_scales_, down_scales_;
  std::vector<Real> recurrence_;
  std::size_t recurrence_stride_ = 0;
};

extern template class TranslationTables<float>;
extern template class TranslationTables<double>;

}  // namespace farsum
