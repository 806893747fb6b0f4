#pragma once
// Runs the engine over a particle set, with the roles that its species have.
#include <cstdint>
#include <vector>

#include "apps/farsum/species_roles.hpp"
#include "fmm/options.hpp"
#include "fmm/points.hpp"
#include "fmm/report.hpp"
#include "io/particles.hpp"

namespace farsum::command {

/// Results for all rows of the set, in engine units (C/m, C/m^2); rows that were not evaluated hold 0. Columns that were not
/// asked for are empty.
struct Evaluation {
  std::vector<double> potential, field_x, field_y, field_z;
  Report report;              ///< of both passes when charges and other targets were evaluated; errors: the larger of the two
  std::size_t evaluated = 0;  ///< rows
  std::size_t acting = 0;
};

/// What the run did is left in `evaluation` also when it ends with an exception.
/// A row that acts and is evaluated never acts on itself: all acting rows are evaluated together and the wanted ones kept.
void evaluate(const io::ParticleSet& set, const RowRoles& roles, Output outputs, const Options& options,
              Evaluation& evaluation);

/// Bytes that the results will take.
std::uint64_t result_bytes(std::uint64_t rows, Output outputs);

}  // namespace farsum::command
