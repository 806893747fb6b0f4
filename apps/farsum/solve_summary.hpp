#pragma once
// The words at the end of a solve.
#include "apps/farsum/evaluation.hpp"
#include "apps/farsum/run.hpp"
#include "apps/farsum/solve_options.hpp"

namespace farsum::command {

/// Prints the answer to the user's question first, then the facts about the charges and the work. `seconds` are in the report.
void say_solve_summary(Run& run, const SolveOptions& options, const io::ParticleSet& set, const RowRoles& roles,
                       const Evaluation& evaluation, double coulomb_constant);

/// What the data themselves give reason to mention.
void add_data_cautions(Run& run, const io::ParticleSet& set, const Evaluation& evaluation);

/// "field error 6e-7 (asked 1e-6), measured at 200 charges"
std::string error_sentence(const ErrorMeasure& error, double tolerance);

}  // namespace farsum::command
