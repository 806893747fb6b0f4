// farsum info: what a particle file holds, what is missing for a solve, and whether it keeps to the standard.
#include <fmt/format.h>

#include <cmath>
#include <memory>

#include "apps/farsum/display.hpp"
#include "apps/farsum/input_options.hpp"
#include "apps/farsum/motion.hpp"
#include "apps/farsum/run.hpp"
#include "apps/farsum/subcommands.hpp"
#include "fmm/error.hpp"
#include "io/conformity.hpp"
#include "io/particle_reader.hpp"

namespace farsum::command {
namespace {

using Json = nlohmann::ordered_json;

struct InfoOptions {
  CommonOptions common;
  InputOptions input;
  std::string file;
  bool strict = false;
};

Json number(double value) {
  return std::isfinite(value) ? Json(value) : Json(nullptr);
}

Json species_json(const io::SpeciesSummary& species) {
  Json entry;
  entry["name"] = valid_utf8(species.name);
  entry["stored"] = species.stored;
  entry["live"] = species.live();
  entry["lost"] = species.lost;
  entry["total_charge"] = species.charge_source.empty() ? Json(nullptr) : number(species.contents.total_charge);
  entry["charge_source"] = valid_utf8(species.charge_source);
  entry["snapshot"] = species.snapshot;
  entry["mean_beta_gamma"] = species.contents.has_motion ? number(species.contents.mean_beta_gamma) : Json(nullptr);
  entry["mean_speed_over_c"] = species.contents.has_motion ? number(species.contents.mean_speed_over_c()) : Json(nullptr);
  for (const char* key : {"records", "missing"}) entry[key] = Json::array();
  for (const std::string& name : species.records) entry["records"].push_back(valid_utf8(name));
  for (const std::string& name : species.missing) entry["missing"].push_back(valid_utf8(name));
  return entry;
}

void fill_report(Run& run, const io::FileSummary& summary) {
  std::vector<std::string> names;
  for (const io::SpeciesSummary& species : summary.species) names.push_back(species.name);
  run.report().set_input(summary.file, summary.iteration, names);
  run.report().json()["count"] = summary.live();
  if (summary.live() > 0) {
    run.report().set_quantity("total_charge", summary.contents.total_charge, "C");
    run.report().set_quantity("extent", summary.contents.extent(), "m");
  }
  Json& info = run.report().json()["info"];
  info["format"] = valid_utf8(summary.format);
  info["iterations"] = Json::array();
  for (const std::string& name : summary.iterations) info["iterations"].push_back(valid_utf8(name));
  info["stored"] = summary.stored();
  info["lost"] = summary.lost();
  info["snapshot"] = summary.snapshot();
  info["species"] = Json::array();
  for (const io::SpeciesSummary& species : summary.species) info["species"].push_back(species_json(species));
}

void say_species(Run& run, const io::SpeciesSummary& species) {
  const io::Contents& contents = species.contents;
  run.say(fmt::format("species {}", printable(species.name)));
  run.say(fmt::format("  particles       {}{}", grouped(species.live()),
                      species.lost > 0 ? fmt::format(" live, {} lost", grouped(species.lost)) : std::string()));
  if (!species.particle_type.empty()) run.say(fmt::format("  kind            {}", printable(species.particle_type)));
  if (!species.charge_source.empty())
    run.say(
        fmt::format("  total charge    {} (from {})", with_unit(contents.total_charge, "C"), printable(species.charge_source)));
  if (contents.has_motion)
    run.say(fmt::format("  motion          mean beta gamma {:.5g}, mean velocity {:.6g} c", contents.mean_beta_gamma,
                        contents.mean_speed_over_c()));
  if (!species.snapshot)
    run.say(fmt::format("  times           recorded from {:.6g} s to {:.6g} s: no snapshot", species.time_first,
                        species.time_last));
  run.say(fmt::format("  records         {}", printable(joined(species.records), 1000)));
  if (!species.missing.empty()) run.say(fmt::format("  missing         {}", printable(joined(species.missing), 1000)));
}

std::string box_text(const io::Contents& contents) {
  std::string text;
  for (std::size_t axis = 0; axis < 3; ++axis)
    text +=
        fmt::format("{}{} {:.6g} .. {:.6g} m", axis == 0 ? "" : ", ", "xyz"[axis], contents.lower[axis], contents.upper[axis]);
  return text;
}

/// What a solve of this file would refuse.
void say_outlook(Run& run, const io::FileSummary& summary) {
  if (summary.species.empty() && summary.iterations.size() > 1) {
    run.say("several iterations: choose one with --iteration to see more");
    return;
  }
  for (const auto& check : {+[](const io::FileSummary& s) { require_snapshot(s); },
                            +[](const io::FileSummary& s) { require_slow_charges(s, false); }}) {
    try {
      check(summary);
    } catch (const Error& error) {
      run.caution(fmt::format("solve will refuse this file: {}; {}", error.message(), error.remedy()));
    }
  }
}

void say_summary(Run& run, const io::FileSummary& summary) {
  run.say(fmt::format("{}: {}, {}{}", printable(summary.file), printable(summary.format), counted(summary.live(), "charge"),
                      summary.lost() > 0 ? fmt::format(" live, {} lost", grouped(summary.lost())) : std::string()));
  if (!joined(summary.iterations).empty())
    run.say(fmt::format(
        "iterations        {}{}", printable(joined(summary.iterations), 500),
        summary.iteration.empty() || summary.iterations.size() == 1 ? "" : "; shown: " + printable(summary.iteration)));
  if (!summary.species.empty()) {
    run.say(fmt::format("units             places in {}, charges in {}", printable(summary.length_unit),
                        printable(summary.charge_unit)));
    if (summary.live() > 0) {
      run.say(fmt::format("total charge      {}", with_unit(summary.contents.total_charge, "C", 6)));
      run.say(fmt::format("extent            {} ({})", with_unit(summary.contents.extent(), "m"), box_text(summary.contents)));
    }
  }
  for (const io::SpeciesSummary& species : summary.species) say_species(run, species);
  for (const std::string& note : summary.notes) run.caution(note);
  say_outlook(run, summary);
  run.say_cautions();
}

/// Lists what breaks the standard; any error among it ends the command with status 1.
void check_strictly(Run& run, const InfoOptions& options) {
  const std::vector<io::Finding> findings = io::check_conformity(options.file, read_options(options.input));
  Json& list = run.report().json()["findings"] = Json::array();
  std::size_t errors = 0;
  for (const io::Finding& finding : findings) {
    const bool is_error = finding.severity == io::Severity::error;
    errors += is_error;
    run.say(fmt::format("{}: {}: {} ({})", is_error ? "error" : "warning", printable(finding.item), printable(finding.message),
                        finding.rule));
    list.push_back({{"severity", is_error ? "error" : "warning"},
                    {"rule", finding.rule},
                    {"item", valid_utf8(finding.item)},
                    {"message", valid_utf8(finding.message)}});
  }
  run.say(fmt::format("conformity: {}, {}", counted(errors, "error"), counted(findings.size() - errors, "warning")));
  if (errors > 0)
    throw Error(ErrorCode::item_bad_value, fmt::format("breaks the standard in {}", counted(errors, "point")), options.file,
                findings.empty() ? "" : findings.front().item, "see the list above");
}

void info(Run& run, const InfoOptions& options) {
  io::ReadOptions read = read_options(options.input);
  read.hooks.on_progress = [&run](double fraction) { run.progress().show("reading", fraction); };
  run.report().set_input(options.file, options.input.iteration, read.species);
  const io::FileSummary summary = io::inspect(options.file, read, io::Depth::contents);
  fill_report(run, summary);
  say_summary(run, summary);
  if (options.strict) check_strictly(run, options);
}

}  // namespace

void add_info(CLI::App& app, int& status) {
  auto options = std::make_shared<InfoOptions>();
  CLI::App& sub = *app.add_subcommand("info", "Show what a particle file holds.");
  sub.add_option("FILE", options->file, "Particle file: openPMD (HDF5), or text with a header line.")
      ->required()
      ->type_name("");
  sub.add_flag("--strict", options->strict, "Also hold the file against the openPMD standard; errors end with status 1.");
  add_input_options(sub, options->input);
  add_common_options(sub, options->common);
  sub.footer(
      help_footer("  farsum info bunch.h5\n  farsum info bunch.h5 --strict --json - --quiet\n"
                  "  farsum info ions.txt --length-unit um --charge-unit e\n"));
  sub.callback([options, &status] { status = run_guarded("info", options->common, [&](Run& run) { info(run, *options); }); });
}

}  // namespace farsum::command
