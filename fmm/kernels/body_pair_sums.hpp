// Near-field and verification sums of one target. Lanes are sources, two targets at a time stay in registers.
// Plain formula: phi_i += q_j / r_ij, E_i += q_j (t_i - s_j) / r_ij^3.

namespace farsum::kernels::FARSUM_TARGET {

inline constexpr std::size_t kTargetsAtOnce = 2;
inline constexpr double kFarSquared = 1e300;

struct PairAccumulator {
  VecDouble potential{}, x{}, y{}, z{}, nearest = splat(kFarSquared);
};

/// One vector of sources on one target. `keep` masks lanes (self pair); used only where Masked.
template <RootAccuracy accuracy, bool mask_zero, bool with_field, bool masked>
inline void add_pairs(PairAccumulator& sum, const PairSums& a, std::size_t j, double tx, double ty, double tz,
                      MaskDouble keep) {
  const VecDouble dx = tx - load(a.sx + j), dy = ty - load(a.sy + j), dz = tz - load(a.sz + j);
  VecDouble r2 = dx * dx + (dy * dy + dz * dz);
  if constexpr (masked) r2 = keep ? r2 : splat(kFarSquared);
  sum.nearest = min(sum.nearest, r2);
  VecDouble w = reciprocal_root<accuracy>(r2);
  if constexpr (mask_zero) w = r2 > 0.0 ? w : VecDouble{};
  if constexpr (masked) w = keep ? w : VecDouble{};
  const VecDouble qw = load(a.sq + j) * w;
  sum.potential += qw;
  if constexpr (with_field) {
    const VecDouble q3 = qw * (w * w);
    sum.x += q3 * dx;
    sum.y += q3 * dy;
    sum.z += q3 * dz;
  }
}

template <bool with_field>
inline void finish_target(const PairSums& a, std::size_t i, const PairAccumulator& sum) {
  a.potential[i] += sum_lanes<double>(sum.potential);
  if constexpr (with_field) {
    a.field_x[i] += sum_lanes<double>(sum.x);
    a.field_y[i] += sum_lanes<double>(sum.y);
    a.field_z[i] += sum_lanes<double>(sum.z);
  }
  const double nearest = min_lanes<double>(sum.nearest);
  if (nearest < a.nearest_squared[i]) a.nearest_squared[i] = nearest;
}

/// Lanes of the vector at source j that are not the self partner of target i.
inline MaskDouble others(std::ptrdiff_t self_source, std::size_t j) {
  MaskDouble keep;
  for (std::size_t lane = 0; lane < kWidth<double>; ++lane) keep[lane] = std::ptrdiff_t(j + lane) == self_source ? 0 : -1;
  return keep;
}

template <RootAccuracy accuracy, bool mask_zero, bool with_field, std::size_t targets>
inline void pair_sums_of(const PairSums& a, std::size_t i) {
  PairAccumulator sum[targets];
  double tx[targets], ty[targets], tz[targets];
  for (std::size_t t = 0; t < targets; ++t) {
    tx[t] = a.tx[i + t];
    ty[t] = a.ty[i + t];
    tz[t] = a.tz[i + t];
  }
  const auto plain = [&](std::size_t begin, std::size_t end) {
    for (std::size_t j = begin; j < end; j += kWidth<double>)
      for (std::size_t t = 0; t < targets; ++t)
        add_pairs<accuracy, mask_zero, with_field, false>(sum[t], a, j, tx[t], ty[t], tz[t], MaskDouble{});
  };
  if (a.self < 0) {
    plain(0, a.n_sources);
  } else {
    const std::ptrdiff_t self = a.self + std::ptrdiff_t(i);
    const std::size_t own = std::size_t(self) / kWidth<double> * kWidth<double>;
    plain(0, own);
    for (std::size_t t = 0; t < targets; ++t)
      add_pairs<accuracy, mask_zero, with_field, true>(sum[t], a, own, tx[t], ty[t], tz[t],
                                                       others(self + std::ptrdiff_t(t), own));
    plain(own + kWidth<double>, a.n_sources);
  }
  for (std::size_t t = 0; t < targets; ++t) finish_target<with_field>(a, i + t, sum[t]);
}

template <RootAccuracy accuracy, bool mask_zero, bool with_field>
void pair_sums_variant(const PairSums& a) {
  std::size_t i = 0;
  for (; i + kTargetsAtOnce <= a.n_targets; i += kTargetsAtOnce)
    pair_sums_of<accuracy, mask_zero, with_field, kTargetsAtOnce>(a, i);
  for (; i < a.n_targets; ++i) pair_sums_of<accuracy, mask_zero, with_field, 1>(a, i);
}

inline void pair_sums(const PairSums& a, RootAccuracy accuracy, bool mask_zero, bool with_field) {
  using Function = void (*)(const PairSums&);
  constexpr RootAccuracy kFast = RootAccuracy::fast, kFull = RootAccuracy::full;
  static constexpr Function kVariants[2][2][2] = {
      {{&pair_sums_variant<kFast, false, false>, &pair_sums_variant<kFast, false, true>},
       {&pair_sums_variant<kFast, true, false>, &pair_sums_variant<kFast, true, true>}},
      {{&pair_sums_variant<kFull, false, false>, &pair_sums_variant<kFull, false, true>},
       {&pair_sums_variant<kFull, true, false>, &pair_sums_variant<kFull, true, true>}}};
  kVariants[accuracy == kFull][mask_zero][with_field](a);
}

/// A sum with its rounding errors collected apart (two-sum of Knuth).
struct CompensatedSum {
  VecDouble value{}, error{};
  void add(VecDouble term) {
    const VecDouble next = value + term;
    const VecDouble back = next - value;
    error += (value - (next - back)) + (term - back);
    value = next;
  }
  double total() const {
    double sum = 0, low = 0;
    for (std::size_t lane = 0; lane < kWidth<double>; ++lane) {
      const double next = sum + value[lane], back = next - sum;
      low += (sum - (next - back)) + (value[lane] - back) + error[lane];
      sum = next;
    }
    return sum + low;
  }
};

inline void exact_sums_of(const ExactSums& arguments, std::size_t i) {
  const PairSums& a = arguments.sums;
  CompensatedSum potential, x, y, z;
  VecDouble potential_scale{}, field_scale{}, nearest = splat(kFarSquared);
  for (std::size_t j = 0; j < a.n_sources; j += kWidth<double>) {
    const MaskDouble keep = others(a.self < 0 ? -1 : a.self + std::ptrdiff_t(i), j);
    const VecDouble dx = a.tx[i] - load(a.sx + j), dy = a.ty[i] - load(a.sy + j), dz = a.tz[i] - load(a.sz + j);
    const VecDouble r2 = dx * dx + (dy * dy + dz * dz);
    const VecDouble others_r2 = keep ? r2 : splat(kFarSquared);
    nearest = min(nearest, others_r2 > 0.0 ? others_r2 : splat(kFarSquared));
    VecDouble w = reciprocal_root<RootAccuracy::full>(others_r2);
    w = others_r2 > 0.0 ? w : VecDouble{};
    w = keep ? w : VecDouble{};
    const VecDouble q = load(a.sq + j), size = q < 0.0 ? -q : q;
    const VecDouble qw = q * w, w2 = w * w, q3 = qw * w2;
    potential.add(qw);
    x.add(q3 * dx);
    y.add(q3 * dy);
    z.add(q3 * dz);
    potential_scale += size * w;
    field_scale += size * w2;
  }
  a.potential[i] += potential.total();
  a.field_x[i] += x.total();
  a.field_y[i] += y.total();
  a.field_z[i] += z.total();
  arguments.potential_scale[i] += sum_lanes<double>(potential_scale);
  arguments.field_scale[i] += sum_lanes<double>(field_scale);
  a.nearest_squared[i] = __builtin_fmin(a.nearest_squared[i], min_lanes<double>(nearest));
}

inline void exact_sums(const ExactSums& arguments) {
  for (std::size_t i = 0; i < arguments.sums.n_targets; ++i) exact_sums_of(arguments, i);
}

}  // namespace farsum::kernels::FARSUM_TARGET
