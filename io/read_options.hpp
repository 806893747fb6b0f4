#pragma once
// What a caller may ask of the particle reader.
#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <vector>

namespace farsum::io {

/// Progress in [0, 1] and the wish to stop (then Error(cancelled)); both are asked between slabs and may be empty.
struct Hooks {
  std::function<void(double)> on_progress;
  std::function<bool()> should_stop;
};

/// Treatment of particles that were recorded at different times (a bunch passing a plane).
enum class NonSnapshot {
  refuse,       ///< Error(not_a_snapshot)
  as_recorded,  ///< take the positions as they stand
  advance,      ///< move each particle freely to ReadOptions::advance_to: x += v (T - t)
};

struct ReadOptions {
  std::optional<std::string> iteration;  ///< digits; leading zeros do not matter. Needed when the file has several.
  std::vector<std::string> species;      ///< empty: all
  std::string length_unit, charge_unit;  ///< for text whose header has no units
  std::optional<double> charge_each;     ///< C of one real particle, where the file tells no charge
  NonSnapshot non_snapshot = NonSnapshot::refuse;
  double advance_to = 0;           ///< s
  bool keep_lost = false;          ///< read lost particles too
  bool load_motion = false;        ///< fill ParticleSet::motion
  bool allow_external = false;     ///< follow links and storage to other files
  std::uint64_t memory_limit = 0;  ///< bytes for the set's arrays; 0 = none. Larger: Error(memory_refused) before allocation
  Hooks hooks;
};

}  // namespace farsum::io
