#pragma once
// Charges that move fast: the sum of static fields is not their field. Checked before every solve.
#include <string>

#include "io/file_summary.hpp"

namespace farsum::command {

/// Mean speed above which a static sum is refused, as a share of the speed of light: at 0.05 c the magnetic and the retarded
/// parts reach a quarter of a percent of the force (beta squared).
inline constexpr double kFastestMeanSpeed = 0.05;

/// The greatest mean speed over c of any species: two bunches against each other do not hide each other's motion.
double greatest_mean_speed(const io::FileSummary& summary);

/// Throws Error(moving_frame) when the charges move too fast and `as_static` is not set. Species must have Contents.
void require_slow_charges(const io::FileSummary& summary, bool as_static);

/// What to know about the motion although the solve goes on; empty when nothing.
std::string motion_caution(const io::FileSummary& summary);

/// Throws Error(not_a_snapshot) naming the options to choose from, when rows were recorded at different times.
void require_snapshot(const io::FileSummary& summary);

}  // namespace farsum::command
