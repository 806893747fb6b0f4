#include "fmm/schedule/session.hpp"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <limits>
#include <string>

#include "fmm/base/cpu.hpp"
#include "fmm/error.hpp"
#include "fmm/kernels/dispatch.hpp"
#include "fmm/octree/root_choice.hpp"
#include "fmm/schedule/close_pairs.hpp"
#include "fmm/schedule/direct.hpp"
#include "fmm/schedule/memory_plan.hpp"
#include "fmm/schedule/merged.hpp"
#include "fmm/schedule/stopwatch.hpp"
#include "fmm/verification/identities.hpp"
#include "fmm/verification/verify.hpp"

namespace farsum {
namespace {

constexpr int kAttempts = 2;
/// Sets up to this size are verified whole: it takes milliseconds, and a sample of so few targets may miss the worst of them.
constexpr std::size_t kWholeSet = 3000;
/// What a retry aims at, as a fraction of the tolerance.
constexpr double kRetryMargin = 0.3;
/// Leaf capacity for a wanted mean number of charges in a leaf: fluctuations of an even density must not divide boxes any more.
constexpr double kCapacityPerFill = 2.5;

Options checked(Options options) {
  if (!(options.tolerance >= 1e-13 && options.tolerance <= 1e-2))
    throw Error(ErrorCode::invalid_argument, "tolerance " + short_number(options.tolerance) + " is out of range",
                "choose a tolerance from 1e-13 to 1e-2");
  if (options.threads < 0) throw Error(ErrorCode::invalid_argument, "the number of threads is negative", "use 0 for all");
  if (options.leaf_capacity < 0)
    throw Error(ErrorCode::invalid_argument, "the leaf capacity is negative", "use 0 for automatic");
  return options;
}

void check_view(const PointsView& points, const char* what) {
  if (points.count > 0 && (!points.x || !points.y || !points.z))
    throw Error(ErrorCode::invalid_argument, std::string(what) + ": a coordinate pointer is null", "pass x, y and z");
  if (points.count > std::numeric_limits<std::uint32_t>::max())
    throw Error(ErrorCode::invalid_argument, std::string(what) + ": more than 2^32 - 1 points", "split the work");
}

void check_result_view(Output outputs, const ResultView& result, std::size_t count) {
  if (!has(outputs, Output::potential | Output::field))
    throw Error(ErrorCode::invalid_argument, "no output is asked for", "ask for potential, field or both");
  const bool missing_potential = has(outputs, Output::potential) && !result.potential;
  const bool missing_field = has(outputs, Output::field) && (!result.field_x || !result.field_y || !result.field_z);
  if (count > 0 && (missing_potential || missing_field))
    throw Error(ErrorCode::invalid_argument, "an array for a requested output is null",
                "pass arrays for every output asked for");
}

/// Only the arrays of the requested outputs.
ResultView requested(Output outputs, ResultView result) {
  if (!has(outputs, Output::potential)) result.potential = nullptr;
  if (!has(outputs, Output::field)) result.field_x = result.field_y = result.field_z = nullptr;
  return result;
}

}  // namespace

Session::Session(Options options)
    : options_(checked(std::move(options))),
      cpu_target_(resolve_cpu_target(options_.cpu_target)),
      kernels_(kernels::kernel_table(cpu_target_)) {}
Session::~Session() = default;

void Session::set_charges(const PointsView& positions, const ChargesView& charges) {
  check_view(positions, "positions");
  if (positions.count != charges.count)
    throw Error(ErrorCode::invalid_argument,
                std::to_string(positions.count) + " positions but " + std::to_string(charges.count) + " charges",
                "give one charge for each position");
  Executor executor(options_.threads);
  tree_.reset();
  merged_.reset();
  verified_ = verified_targets_ = false;
  bounds_ = checked_bounds(positions, "position", executor);
  positions_ = positions;
  units_.length = binary_exponent(bounds_.extent());
  update_charges(charges);
}

void Session::update_charges(const ChargesView& charges) {
  if (positions_.count != charges.count || (charges.count > 0 && !charges.q))
    throw Error(ErrorCode::invalid_argument, "charges: wrong number of values, or a null pointer",
                "give one charge for each position");
  Executor executor(options_.threads);
  charge_sums_ = checked_charge_sums(charges, executor);
  charges_ = charges;
  aimed_tolerance_ = options_.tolerance;
  units_.charge = binary_exponent(charge_sums_.max_abs);
  ordered_charges_ = {};
  if (merged_) merged_->update_charges(charges);
}

bool Session::trivial() const noexcept {
  return charge_sums_.max_abs == 0;
}

void Session::start_report(const PointsView& targets) {
  report_ = {};
  report_.charges = charges_.count;
  report_.targets = targets.count;
  report_.total_charge = charge_sums_.sum;
  report_.extent = bounds_.extent();
  report_.tolerance = options_.tolerance;
  report_.plan.cpu_target = kernels_.name;
  report_.plan.method = "direct";
  report_.plan.precision = "double";
  ledger_.restart_peak();
}

void Session::write_zeros(std::size_t count, const ResultView& result) {
  for (std::size_t i = 0; i < count; ++i)
    for (double* base : {result.potential, result.field_x, result.field_y, result.field_z})
      if (base) base[std::ptrdiff_t(i) * result.stride] = 0;
  report_.error.samples = 0;
  report_.error.met = true;
  report_.error.potential.measured = result.potential != nullptr;
  report_.error.field.measured = result.field_x != nullptr;
  report_.energy.available = result.potential != nullptr;
  report_.checks.available = result.field_x != nullptr;
  report_.plan.attempts = 1;
}

void Session::prepare_tree(Executor& executor) {
  const Stopwatch watch(report_.seconds.tree);
  if (!tree_) {
    options_.on_progress ? options_.on_progress(Phase::tree, 0) : void();
    const PowerOfTwo scale = units_.scale_length();
    Bounds scaled = bounds_;
    for (std::size_t axis = 0; axis < 3; ++axis) {
      scaled.low[axis] = scale(bounds_.low[axis]);
      scaled.high[axis] = scale(bounds_.high[axis]);
    }
    tree_ = build_octree(positions_, scale, choose_frame(scaled, positions_.count, leaf_fill()), {leaf_capacity()}, executor,
                         ledger_);
    if (options_.coincident == Coincident::skip)
      merge_coincident(executor);
    else
      refuse_undividable(*tree_);
  }
  if (!merged_ && ordered_charges_.size() == 0)
    ordered_charges_ = gather_charges(charges_, units_.scale_charge(), *tree_, executor, ledger_);
}

void Session::refuse_undividable(const Octree& tree) const {
  if (const auto pair = undividable_pair(tree, leaf_capacity())) throw_close_pair(positions_, pair->first, pair->second);
}

void Session::merge_coincident(Executor& executor) {
  std::optional<DistinctPlaces> places = find_coincident(*tree_, executor);
  if (!places) return refuse_undividable(*tree_);
  Options inner = options_;
  inner.coincident = Coincident::error;
  merged_ = std::make_unique<Merged>(std::move(*places), positions_, charges_, inner);
}

void Session::evaluate(Output outputs, const ResultView& result) {
  start_report(positions_);
  check_result_view(outputs, result, positions_.count);
  const ResultView wanted = requested(outputs, result);
  if (trivial() || positions_.count < 2) return write_zeros(positions_.count, wanted);
  Executor executor(options_.threads);
  report_.threads = executor.threads();
  predict_memory(positions_.count, true);
  prepare_tree(executor);
  if (merged_) return evaluate_merged(outputs, wanted);
  const Prepared prepared{*tree_, ordered_charges_, *tree_, units_};
  run_attempts(prepared, wanted, executor, [&] { check_results(wanted, executor); });
}

void Session::evaluate_merged(Output outputs, const ResultView& result) {
  const double tree_seconds = report_.seconds.tree;
  const std::size_t skipped = positions_.count - merged_->places();
  try {
    merged_->evaluate(outputs, result);
  } catch (const Error& error) {
    report_ = merged_->report();
    throw;
  }
  report_ = merged_->report();
  report_.charges = report_.targets = positions_.count;
  report_.notes.skipped_coincident = skipped;
  report_.seconds.tree += tree_seconds;
  report_.seconds.solve += tree_seconds;
}

void Session::evaluate_at(const PointsView& targets, Output outputs, const ResultView& result) {
  check_view(targets, "targets");
  start_report(targets);
  check_result_view(outputs, result, targets.count);
  const ResultView wanted = requested(outputs, result);
  Executor executor(options_.threads);
  report_.threads = executor.threads();
  Bounds all = checked_bounds(targets, "target", executor);
  if (trivial() || targets.count == 0) return write_zeros(targets.count, wanted);
  all.join(bounds_);
  Units units = units_;
  units.length = binary_exponent(all.extent());
  predict_memory(targets.count, false);
  std::optional<Octree> source_tree, target_tree;
  AlignedArray<double> charges;
  {
    const Stopwatch watch(report_.seconds.tree);
    const PowerOfTwo scale = units.scale_length();
    for (std::size_t axis = 0; axis < 3; ++axis) {
      all.low[axis] = scale(all.low[axis]);
      all.high[axis] = scale(all.high[axis]);
    }
    const Frame frame = choose_frame(all, std::max(positions_.count, targets.count), leaf_fill());
    source_tree = build_octree(positions_, scale, frame, {leaf_capacity()}, executor, ledger_);
    target_tree = build_octree(targets, scale, frame, {leaf_capacity()}, executor, ledger_);
    charges = gather_charges(charges_, units.scale_charge(), *source_tree, executor, ledger_);
  }
  run_attempts({*source_tree, charges, *target_tree, units}, wanted, executor, [] {});
}

void Session::run_attempts(const Prepared& prepared, const ResultView& result, Executor& executor,
                           const std::function<void()>& after_pass) {
  double tolerance = same_points(prepared) ? aimed_tolerance_ : options_.tolerance;
  for (int attempt = 1; attempt <= kAttempts; ++attempt) {
    report_.plan.attempts = attempt;
    {
      const Stopwatch watch(report_.seconds.solve);
      run_passes(prepared, choose_plan(prepared, tolerance), result, executor);
    }
    refuse_close_pairs(prepared);
    after_pass();
    if (!verification_wanted(prepared)) break;
    verify(prepared, result, executor);
    if (accept_or_retry(prepared, attempt)) break;
    const double missed = std::max({report_.error.potential.rms, report_.error.field.rms, report_.error.potential.typical / 3,
                                    report_.error.field.typical / 3});
    tolerance *= std::max(1e-3, kRetryMargin * options_.tolerance / missed);
    if (same_points(prepared)) aimed_tolerance_ = tolerance;
  }
  report_.seconds.solve += report_.seconds.tree;
  report_.memory.peak_bytes = ledger_.peak();
}

std::uint32_t Session::leaf_capacity() const noexcept {
  return options_.leaf_capacity > 0 ? std::uint32_t(options_.leaf_capacity) : default_leaf_capacity(options_.tolerance);
}

void Session::predict_memory(std::size_t targets, bool same_points) {
  const MemoryQuery query{positions_.count,   targets,    same_points, chosen_method(positions_.count, targets) == Method::tree,
                          options_.tolerance, leaf_fill()};
  report_.memory.predicted_bytes = predicted_bytes(query);
  refuse_above(report_.memory.predicted_bytes, options_.memory_limit);
}

Method Session::chosen_method(std::size_t sources, std::size_t targets) const noexcept {
  if (options_.method != Method::automatic) return options_.method;
  return std::sqrt(double(sources) * double(targets)) < direct_break_even(options_.tolerance) ? Method::direct : Method::tree;
}

double Session::leaf_fill() const noexcept {
  return double(leaf_capacity()) / kCapacityPerFill;
}

EvaluationPlan Session::choose_plan(const Prepared& prepared, double tolerance) const noexcept {
  EvaluationPlan plan;
  plan.tolerance = tolerance;
  plan.root_accuracy = tolerance >= 1e-10 ? kernels::RootAccuracy::fast : kernels::RootAccuracy::full;
  plan.method = chosen_method(prepared.sources.count, prepared.targets.count);
  return plan;
}

double Session::charge_rms(const Units& units) const noexcept {
  return units.scale_charge()(charge_sums_.max_abs) * std::sqrt(charge_sums_.sum_squares / double(charges_.count));
}

void Session::run_passes(const Prepared& prepared, const EvaluationPlan& plan, const ResultView& result, Executor& executor) {
  if (nearest_squared_.size() != prepared.targets.count) nearest_squared_ = {ledger_, prepared.targets.count};
  ResultBuffer results(prepared.targets.count, ledger_);
  const EvaluationJob job{prepared.sources,
                          prepared.charges.data(),
                          prepared.targets,
                          result.field_x != nullptr,
                          options_.coincident == Coincident::skip,
                          plan.root_accuracy,
                          kernels_,
                          executor,
                          ledger_,
                          results,
                          nearest_squared_.data(),
                          options_};
  report_.plan.leaf_capacity = int(leaf_capacity());
  if (plan.method == Method::tree) tree_evaluator_.evaluate(job, charge_rms(prepared.units), plan.tolerance, report_);
  const Stopwatch watch(report_.seconds.near);
  if (plan.method == Method::direct) evaluate_direct(job);
  results.deliver(result, prepared.targets.index.data(), prepared.units.potential(), prepared.units.field(), executor);
}

void Session::refuse_close_pairs(const Prepared& prepared) {
  const ClosestPair closest = closest_pair(prepared.sources, prepared.targets, nearest_squared_.data());
  report_.notes.nearest_distance = PowerOfTwo(prepared.units.length)(std::sqrt(closest.squared));
  if (&prepared.sources != &prepared.targets && options_.coincident == Coincident::skip) {
    report_.notes.targets_on_charges = std::size_t(std::count(nearest_squared_.begin(), nearest_squared_.end(), 0.0));
    return;
  }
  if (!closest.too_close) return;
  if (&prepared.sources == &prepared.targets) throw_close_pair(positions_, closest.target, closest.source);
  throw_target_on_charge(positions_, closest.target, closest.source, closest.squared == 0);
}

bool Session::same_points(const Prepared& prepared) noexcept {
  return &prepared.sources == &prepared.targets;
}

bool Session::verification_wanted(const Prepared& prepared) const noexcept {
  const bool done = same_points(prepared) ? verified_ : verified_targets_;
  return options_.verification == Verification::every || (options_.verification == Verification::first && !done);
}

void Session::verify(const Prepared& prepared, const ResultView& result, Executor& executor) {
  const Stopwatch watch(report_.seconds.verify);
  if (options_.on_progress) options_.on_progress(Phase::verify, 0);
  const VerificationOutcome outcome = verify_result(
      {prepared.sources, prepared.charges.data(), charge_rms(prepared.units), prepared.targets, nearest_squared_.data(), result,
       prepared.units.potential(), prepared.units.field(), report_.plan.order},
      prepared.targets.count <= kWholeSet ? prepared.targets.count : options_.samples, options_.tolerance, kernels_, executor);
  report_.error = outcome.measure;
  report_.notes.field_median = prepared.units.field()(outcome.field_median);
}

bool Session::accept_or_retry(const Prepared& prepared, int attempt) {
  const ErrorMeasure& error = report_.error;
  const bool carried = error.floor_tolerance <= options_.tolerance;
  if (!carried && !options_.best_effort)
    throw Error(ErrorCode::tolerance_unreachable,
                "tolerance " + short_number(options_.tolerance) + " cannot be reached with these charges in double precision",
                "reachable here: " + short_number(error.floor_tolerance) + "; ask for that, or for best effort");
  (same_points(prepared) ? verified_ : verified_targets_) = error.met;
  if (error.met || attempt == kAttempts || !carried) {
    if (!error.met && !options_.best_effort)
      throw Error(ErrorCode::accuracy_not_reached,
                  "measured error (potential rms " + short_number(error.potential.rms) + ", typical " +
                      short_number(error.potential.typical) + "; field rms " + short_number(error.field.rms) + ", typical " +
                      short_number(error.field.typical) + ") exceeds the tolerance " + short_number(options_.tolerance),
                  "ask for a larger tolerance, or for best effort");
    if (!error.met) report_.warnings.push_back("the tolerance is not met (best effort)");
    return true;
  }
  return false;
}

void Session::check_results(const ResultView& result, Executor& executor) {
  const IdentityResult identities =
      check_identities({positions_, charges_, result, bounds_, units_.scale_length(), units_.scale_charge(), units_.potential(),
                        units_.field(), units_.energy()},
                       executor);
  if (!identities.finite)
    throw Error(ErrorCode::range_exceeded,
                "the result at charge " + std::to_string(identities.first_bad) + " is outside the range of double numbers",
                "use other units");
  report_.energy = identities.energy;
  report_.energy.error_bound *= options_.tolerance;
  report_.checks = identities.checks;
  report_.notes.field_max = identities.field_max;
}

ErrorMeasure Session::measure(Output outputs, const ResultView& result) {
  start_report(positions_);
  check_result_view(outputs, result, positions_.count);
  const ResultView wanted = requested(outputs, result);
  Executor executor(options_.threads);
  if (trivial() || positions_.count < 2) {
    write_zeros(0, wanted);
    return report_.error;
  }
  prepare_tree(executor);
  if (merged_) return merged_->measure(outputs, wanted);
  nearest_squared_ = {ledger_, positions_.count};
  nearest_in_leaves(*tree_, nearest_squared_.data(), executor);
  report_.plan.order = typical_order(options_.tolerance);
  verify({*tree_, ordered_charges_, *tree_, units_}, wanted, executor);
  return report_.error;
}

}  // namespace farsum
