#include "apps/farsum/input_options.hpp"

#include <cmath>

#include "apps/farsum/display.hpp"
#include "apps/farsum/exit_status.hpp"
#include "io/units.hpp"

namespace farsum::command {

void add_input_options(CLI::App& app, InputOptions& options) {
  constexpr const char* kGroup = "Reading the input";
  app.add_option("--iteration", options.iteration, "Which iteration (time step) of the file; needed when there are several.")
      ->type_name("NUMBER")
      ->group(kGroup);
  app.add_option("--species", options.species, "Only these species, separated by commas. Default: all.")
      ->type_name("LIST")
      ->group(kGroup);
  app.add_option("--length-unit", options.length_unit,
                 "Unit of the places in a text file whose header has none, e.g. m, mm, Angstrom.")
      ->type_name("UNIT")
      ->group(kGroup);
  app.add_option("--charge-unit", options.charge_unit,
                 "Unit of the charges in a text file whose header has none, e.g. C, pC, e.")
      ->type_name("UNIT")
      ->group(kGroup);
  app.add_option("--particle-charge", options.particle_charge,
                 "Charge of one real particle in elementary charges, where the file tells\nno charge: -1 for electrons.")
      ->type_name("Z")
      ->group(kGroup);
  app.add_flag("--as-snapshot", options.as_snapshot,
               "Take places as they stand although the particles were recorded at\ndifferent times (a bunch seen at a plane).")
      ->group(kGroup);
  app.add_option("--advance-to", options.advance_to,
                 "Move every particle freely from the time it was recorded at to this\ncommon time, in seconds.")
      ->type_name("TIME")
      ->group(kGroup);
}

io::ReadOptions read_options(const InputOptions& options) {
  io::ReadOptions read;
  if (!options.iteration.empty()) read.iteration = options.iteration;
  read.species = split_list(options.species);
  if (!options.species.empty() && read.species.empty()) throw UsageError("--species: the list is empty");
  read.length_unit = options.length_unit;
  read.charge_unit = options.charge_unit;
  if (options.particle_charge) {
    if (!std::isfinite(*options.particle_charge)) throw UsageError("--particle-charge: the value is not a finite number");
    read.charge_each = *options.particle_charge * io::kElementaryCharge;
  }
  if (options.as_snapshot && options.advance_to)
    throw UsageError("--as-snapshot and --advance-to exclude each other", "give one of them");
  if (options.as_snapshot) read.non_snapshot = io::NonSnapshot::as_recorded;
  if (options.advance_to) {
    if (!std::isfinite(*options.advance_to)) throw UsageError("--advance-to: the value is not a finite time");
    read.non_snapshot = io::NonSnapshot::advance;
    read.advance_to = *options.advance_to;
  }
  return read;
}

}  // namespace farsum::command
