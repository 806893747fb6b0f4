#pragma once
// What an evaluation did and how good it is. All numbers are in the caller's own units (charge Q, length L, no constants).
#include <array>
#include <cstddef>
#include <cstdint>
#include <string>
#include <vector>

namespace farsum {

/// Error of one output, from exact sums at `samples` targets whose squares are weighted by their inverse probability.
/// With e_i = |f_i - f_i_exact| and f0 = median of q_rms / d_i^k (d_i = distance to the nearest other charge, k = 1 potential,
/// 2 field):
struct OutputError {
  bool measured = false;
  double rms = 0;        ///< sqrt(mean e^2) / max(sqrt(mean f^2), f0)
  double rms_upper = 0;  ///< one-sided 95 % bound on rms
  double typical = 0;    ///< sqrt(mean (e_i / max(|f_i|, median |f|, f0))^2)
  double worst = 0;      ///< max e_i / max(sqrt(mean f^2), f0)
};

struct ErrorMeasure {
  OutputError potential, field;
  std::size_t samples = 0;
  bool met = false;            ///< every measured output has rms <= t and typical <= 3 t
  double floor_tolerance = 0;  ///< smallest tolerance that double precision carries for these data
};

/// Exact properties of an isolated set of charges; each is 0 in exact arithmetic and is given relative to its own scale.
struct IdentityChecks {
  bool available = false;   ///< needs field (force, torque) and, for the virial, potential at the charges themselves
  double total_force = 0;   ///< |sum F_i| / (N rms|F|)
  double total_torque = 0;  ///< |sum (x_i - x_mean) x F_i| / (N rms|F| extent)
  double virial = 0;        ///< |sum q_i (x_i - x_mean).E_i - U| / (1/2 sum |q_i phi_i|)
};

struct Energy {
  bool available = false;
  double value = 0;        ///< U = 1/2 sum q_i phi_i, in Q^2/L
  double error_bound = 0;  ///< t * 1/2 sum |q_i phi_i|
};

struct PhaseSeconds {
  double tree = 0, lists = 0, far = 0, near = 0, solve = 0,
         verify = 0;  ///< solve = all from input arrays to results, without verify
};

struct Plan {
  std::string method;  ///< "direct" or "tree"
  int order = 0;       ///< highest degree kept in the expansions
  int leaf_capacity = 0;
  int depth = 0;           ///< levels below the root
  std::string precision;   ///< far-field arithmetic: "single" or "double"
  std::string cpu_target;  ///< "portable", "avx2", "avx512"
  int attempts = 0;
  std::size_t boxes = 0, leaves = 0;
};

struct MemoryUse {
  std::uint64_t predicted_bytes = 0, peak_bytes = 0;  ///< engine memory beyond the caller's arrays
};

/// Warning signs in the data themselves.
struct FieldNotes {
  double field_max = 0, field_median = 0;  ///< of |E_i| over all targets
  double nearest_distance = 0;             ///< smallest distance between two charges (0 if fewer than two)
  std::size_t skipped_coincident = 0;      ///< charges that share their place with an earlier one (Coincident::skip)
  std::size_t targets_on_charges = 0;      ///< targets that lie exactly on a charge (Coincident::skip)
};

struct Report {
  std::size_t charges = 0, targets = 0;
  double total_charge = 0;
  double extent = 0;  ///< largest edge of the bounding box of the charges
  int threads = 0;
  double tolerance = 0;
  ErrorMeasure error;
  IdentityChecks checks;
  Energy energy;
  PhaseSeconds seconds;
  Plan plan;
  MemoryUse memory;
  FieldNotes notes;
  std::vector<std::string> warnings;
};

}  // namespace farsum
