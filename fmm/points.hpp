#pragma once
// Views of the caller's arrays. Element i of a component lies at base[i * stride]; nothing is copied or owned here.
// Separate arrays have stride 1; rows (x, y, z) packed in one array have base pointers p, p + 1, p + 2 and stride 3.
#include <cstddef>

namespace farsum {

/// n points in space, in any unit of length.
struct PointsView {
  const double* x = nullptr;
  const double* y = nullptr;
  const double* z = nullptr;
  std::size_t count = 0;
  std::ptrdiff_t stride = 1;
};

/// n charges, in any unit of charge; one for each point.
struct ChargesView {
  const double* q = nullptr;
  std::size_t count = 0;
  std::ptrdiff_t stride = 1;
};

/// Where results go: a null pointer where an output is not asked for. Results are assigned in the caller's order.
struct ResultView {
  double* potential = nullptr;
  double* field_x = nullptr;
  double* field_y = nullptr;
  double* field_z = nullptr;
  std::ptrdiff_t stride = 1;
};

}  // namespace farsum
