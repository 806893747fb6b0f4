#pragma once
// Prints rows of the system benchmark as one table of plain text.
#include "bench/system/measure.hpp"

namespace farsum::bench {

/// Processor, compiler, flags and cores: what a number means only together with.
void print_machine();
/// What the columns say.
void print_legend(int repeats);
void print_header();
void print_row(const Row& row);

}  // namespace farsum::bench
