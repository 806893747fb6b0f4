// farsum generate: particle files with this project's own demonstration charges.
#include <fmt/format.h>

#include <charconv>
#include <cmath>
#include <memory>

#include "apps/farsum/display.hpp"
#include "apps/farsum/exit_status.hpp"
#include "apps/farsum/run.hpp"
#include "apps/farsum/scenes/scene.hpp"
#include "apps/farsum/signals.hpp"
#include "apps/farsum/subcommands.hpp"
#include "io/result_writer.hpp"
#include "io/units.hpp"

namespace farsum::command {
namespace {

constexpr std::uint64_t kBytesEach = 100;       // of memory, at the peak of the making
constexpr double kLargestCount = 4294967295.0;  // the engine counts with 32 bits

struct GenerateOptions {
  CommonOptions common;
  std::string scene, output, count;
  std::uint64_t seed = 1;
  bool both_signs = false;
};

std::string scene_list() {
  std::string text;
  for (const scenes::Entry& entry : scenes::catalogue())
    text += fmt::format("  {:<15} {}{}\n", entry.name, entry.description, entry.both_signs_allowed ? " [--both-signs]" : "");
  return text;
}

/// A whole number, also as 1e6.
std::size_t parse_count(const std::string& text) {
  double value = 0;
  const auto [end, failure] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (failure != std::errc() || end != text.data() + text.size() || !(value >= 0 && value <= kLargestCount) ||
      value != std::floor(value))
    throw UsageError(fmt::format("--count: '{}' is not a whole number from 0 to {:.0f}", text, kLargestCount));
  return std::size_t(value);
}

const scenes::Entry& chosen_scene(const GenerateOptions& options) {
  const scenes::Entry* entry = scenes::find_entry(options.scene);
  if (!entry) {
    std::vector<std::string> names;
    for (const scenes::Entry& known : scenes::catalogue()) names.emplace_back(known.name);
    throw UsageError(fmt::format("there is no scene '{}'", options.scene), "choose one of " + joined(names));
  }
  if (options.both_signs && !entry->both_signs_allowed)
    throw UsageError(fmt::format("--both-signs does not apply to the scene {}", entry->name));
  return *entry;
}

std::vector<io::SpeciesColumns> columns_of(const scenes::Scene& scene) {
  std::vector<io::SpeciesColumns> columns;
  std::uint64_t first_id = 0;
  for (const scenes::Species& species : scene.species) {
    io::SpeciesColumns c;
    c.name = species.name;
    c.count = species.x.size();
    c.x = species.x.data();
    c.y = species.y.data();
    c.z = species.z.data();
    if (!species.px.empty()) {
      c.momentum_x = species.px.data();
      c.momentum_y = species.py.data();
      c.momentum_z = species.pz.data();
    }
    c.charge = species.charge;
    c.mass = species.mass;
    c.weighting = species.weight;
    c.first_id = first_id;
    first_id += c.count;
    columns.push_back(std::move(c));
  }
  return columns;
}

void say_summary(Run& run, const GenerateOptions& options, const scenes::Scene& scene, std::size_t count) {
  double total = 0;
  for (const scenes::Species& species : scene.species) total += double(species.x.size()) * species.charge * species.weight;
  run.report().set_quantity("total_charge", total, "C");
  run.say(fmt::format("{} written to {}: {}", counted(count, "charge"), printable(options.output), scene.comment));
  for (const scenes::Species& species : scene.species)
    run.say(fmt::format("  {:<16} {:>12}   each {:.4g} e x {:.6g}, together {}", species.name, grouped(species.x.size()),
                        species.charge / io::kElementaryCharge, species.weight,
                        with_unit(double(species.x.size()) * species.charge * species.weight, "C")));
}

void generate(Run& run, const GenerateOptions& options) {
  const scenes::Entry& entry = chosen_scene(options);
  const std::size_t count = options.count.empty() ? entry.default_count : parse_count(options.count);
  run.report().json()["count"] = count;
  run.report().json()["output"]["file"] = valid_utf8(options.output);
  io::check_output_target(options.output, options.common.overwrite, io::predict_result_bytes(count));
  run.require_memory(count * kBytesEach, counted(count, "charge"));
  run.progress().show("making the charges", -1);
  const scenes::Scene scene = entry.build({count, options.seed, options.both_signs});

  io::WriteOptions write;
  write.overwrite = options.common.overwrite;
  write.on_temporary = temporary_hook();
  write.hooks.on_progress = [&run](double fraction) { run.progress().show("writing", fraction); };
  write.software_version = FARSUM_VERSION;
  write.comment = scene.comment;
  const io::RunAttributes attributes = {{"scene", std::string(entry.name)},
                                        {"count", std::int64_t(count)},
                                        {"seed", fmt::format("{}", options.seed)},
                                        {"bothSigns", std::int64_t(options.both_signs)}};
  io::write_particles(options.output, columns_of(scene), attributes, write);
  say_summary(run, options, scene, count);
}

}  // namespace

void add_generate(CLI::App& app, int& status) {
  auto options = std::make_shared<GenerateOptions>();
  CLI::App& sub = *app.add_subcommand("generate", "Make a particle file with demonstration charges.");
  sub.add_option("SCENE", options->scene, "Name of a scene, see below.")->required()->type_name("");
  sub.add_option("OUT", options->output, "File to write (openPMD, HDF5).")->required()->type_name("");
  sub.add_option("--count", options->count, "How many charges. Default: depends on the scene, 10 000 to 100 000.")
      ->type_name("N");
  sub.add_option("--seed", options->seed,
                 "Start of the random numbers; equal seeds give equal charges\nfrom every build. Default: 1.")
      ->type_name("S");
  sub.add_flag("--both-signs", options->both_signs, "Make every second charge negative, where the scene allows it.");
  add_common_options(sub, options->common);
  sub.footer("Scenes:\n" + scene_list() + "\n" +
             help_footer("  farsum generate proton_bunch bunch.h5 --count 1e6\n"
                         "  farsum generate droplets spray.h5 --seed 7 --both-signs\n"));
  sub.callback(
      [options, &status] { status = run_guarded("generate", options->common, [&](Run& run) { generate(run, *options); }); });
}

}  // namespace farsum::command
