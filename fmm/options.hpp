#pragma once
// What a caller may ask of the engine. The defaults serve; `tolerance` is the one number that most users set.
#include <cstddef>
#include <cstdint>
#include <functional>

namespace farsum {

/// Quantities at a target. Combine with |.
///   potential: phi_i = sum_{j != i} q_j / |x_i - x_j|                       in charge / length
///   field:     E_i = -grad phi_i = sum_{j != i} q_j (x_i - x_j)/|x_i - x_j|^3  in charge / length^2
enum class Output : unsigned { none = 0, potential = 1, field = 2 };
constexpr Output operator|(Output a, Output b) {
  return Output(unsigned(a) | unsigned(b));
}
constexpr Output operator&(Output a, Output b) {
  return Output(unsigned(a) & unsigned(b));
}
constexpr bool has(Output set, Output item) {
  return (unsigned(set) & unsigned(item)) != 0;
}

/// Direct double sum, tree, or whichever is predicted to be faster.
enum class Method { automatic, direct, tree };

/// Pairs of charges at exactly the same place (or a target exactly on a charge): an error that names both, or left out of the
/// sums.
enum class Coincident { error, skip };

/// When the error of an evaluation is measured against exact sums.
enum class Verification { never, first, every };

/// Instruction set of the vector kernels. `automatic` takes the best that the machine has; the environment variable
/// FARSUM_CPU_TARGET (portable, avx2, avx512) forces one where the option is automatic.
enum class CpuTarget { automatic, portable, avx2, avx512 };

/// Stage of an evaluation, as told to Options::on_progress.
enum class Phase { tree, lists, far, near, verify };

struct Options {
  /// Error asked for, 1e-13 <= tolerance <= 1e-2. Met when for each output rms <= tolerance and typical <= 3 tolerance
  /// (fmm/report.hpp defines both).
  double tolerance = 1e-6;
  Method method = Method::automatic;
  Coincident coincident = Coincident::error;
  Verification verification = Verification::first;
  /// Number of targets at which exact sums are formed. Of small sets (up to 3000 targets) all are taken: it costs milliseconds,
  /// and the stated error is then the true one.
  std::size_t samples = 200;
  /// Return the best reachable result instead of an error when the tolerance is missed or cannot be carried by the data.
  bool best_effort = false;
  /// Upper limit of threads; 0 = all that this process may use. Never changes a bit of any result.
  int threads = 0;
  /// Ceiling in bytes for the memory that the engine takes beyond the caller's arrays; 0 = none. The plan never depends on it:
  /// a run that would exceed it is refused.
  std::uint64_t memory_limit = 0;
  CpuTarget cpu_target = CpuTarget::automatic;
  /// Forces the leaf capacity of the tree (0 = chosen); for tests and studies.
  int leaf_capacity = 0;
  /// Called now and then from the calling thread with the stage and the done fraction of it.
  std::function<void(Phase, double)> on_progress;
  /// Asked between pieces of work; true ends the call with ErrorCode::cancelled.
  std::function<bool()> should_stop;
};

}  // namespace farsum
