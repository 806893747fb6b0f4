#include "apps/farsum/run_report.hpp"

#include <cmath>

#include "apps/farsum/display.hpp"
#include "apps/farsum/resources.hpp"

namespace farsum::command {
namespace {

using Json = nlohmann::ordered_json;

constexpr int kReportVersion = 1;

Json finite(double value) {
  return std::isfinite(value) ? Json(value) : Json(nullptr);
}

Json nulls(std::initializer_list<const char*> keys) {
  Json group = Json::object();
  for (const char* key : keys) group[key] = nullptr;
  return group;
}

void set_output_error(Json& group, const std::string& name, const OutputError& error) {
  if (!error.measured) return;
  group[name + "_rms"] = finite(error.rms);
  group[name + "_rms_upper"] = finite(error.rms_upper);
  group[name + "_typical"] = finite(error.typical);
  group[name + "_worst"] = finite(error.worst);
}

}  // namespace

RunReport::RunReport(const std::string& command) {
  json_["report_version"] = kReportVersion;
  json_["command"] = command;
  json_["status"] = "failed";
  json_["exit_status"] = 0;
  json_["failure"] = nulls({"code", "message", "file", "item", "remedy"});
  json_["input"] = nulls({"file", "iteration"});
  json_["input"]["species"] = Json::array();
  json_["output"] = nulls({"file"});
  json_["count"] = nullptr;
  for (const char* key : {"total_charge", "extent"}) json_[key] = nulls({"value", "unit"});
  json_["tolerance"] = nullptr;
  json_["error"] = nulls({"potential_rms", "field_rms", "potential_rms_upper", "field_rms_upper", "potential_typical",
                          "field_typical", "potential_worst", "field_worst", "samples", "met"});
  json_["checks"] = nulls({"total_force", "total_torque", "virial"});
  json_["energy"] = nulls({"value", "unit", "error_bound"});
  json_["constants"] = nulls({"source", "vacuum_permittivity", "unit"});
  json_["permittivity"] = nullptr;
  json_["threads"] = nullptr;
  json_["seconds"] = nulls({"read", "tree", "lists", "far", "near", "solve", "verify", "write"});
  json_["plan"] = nulls({"method", "order", "leaf_capacity", "depth", "precision", "cpu_target", "attempts"});
  json_["memory"] = nulls({"predicted_bytes", "peak_bytes"});
  json_["machine"] = valid_utf8(machine_name());
  json_["version"] = FARSUM_VERSION;
  json_["warnings"] = Json::array();
}

void RunReport::set_input(const std::string& file, const std::string& iteration, const std::vector<std::string>& species) {
  Json& input = json_["input"];
  input["file"] = valid_utf8(file);
  if (!iteration.empty()) input["iteration"] = valid_utf8(iteration);
  input["species"] = Json::array();
  for (const std::string& name : species) input["species"].push_back(valid_utf8(name));
}

void RunReport::set_number(const char* group, const char* key, double value) {
  json_[group][key] = finite(value);
}

void RunReport::set_quantity(const char* key, double value, const char* unit) {
  json_[key]["value"] = finite(value);
  json_[key]["unit"] = unit;
}

void RunReport::set_errors(const ErrorMeasure& error) {
  Json& group = json_["error"];
  set_output_error(group, "potential", error.potential);
  set_output_error(group, "field", error.field);
  group["samples"] = error.samples;
  if (error.potential.measured || error.field.measured) group["met"] = error.met;
}

void RunReport::set_engine(const Report& report) {
  json_["threads"] = report.threads;
  set_errors(report.error);
  if (report.checks.available) {
    set_number("checks", "total_force", report.checks.total_force);
    set_number("checks", "total_torque", report.checks.total_torque);
    set_number("checks", "virial", report.checks.virial);
  }
  const PhaseSeconds& seconds = report.seconds;
  set_number("seconds", "tree", seconds.tree);
  set_number("seconds", "lists", seconds.lists);
  set_number("seconds", "far", seconds.far);
  set_number("seconds", "near", seconds.near);
  set_number("seconds", "solve", seconds.solve);
  set_number("seconds", "verify", seconds.verify);
  Json& plan = json_["plan"];
  if (!report.plan.method.empty()) {
    plan["method"] = report.plan.method;
    plan["order"] = report.plan.order;
    plan["leaf_capacity"] = report.plan.leaf_capacity;
    plan["depth"] = report.plan.depth;
    plan["precision"] = report.plan.precision;
    plan["cpu_target"] = report.plan.cpu_target;
    plan["attempts"] = report.plan.attempts;
  }
  json_["memory"]["predicted_bytes"] = report.memory.predicted_bytes;
}

void RunReport::add_warning(const std::string& text) {
  warnings_.push_back(text);
  json_["warnings"].push_back(valid_utf8(text));
}

void RunReport::set_failure(std::string_view code, const std::string& message, const std::string& file, const std::string& item,
                            const std::string& remedy, int exit_status) {
  json_["status"] = "failed";
  json_["exit_status"] = exit_status;
  Json& failure = json_["failure"];
  failure["code"] = code;
  failure["message"] = valid_utf8(message);
  failure["file"] = file.empty() ? Json(nullptr) : Json(valid_utf8(file));
  failure["item"] = item.empty() ? Json(nullptr) : Json(valid_utf8(item));
  failure["remedy"] = remedy.empty() ? Json(nullptr) : Json(valid_utf8(remedy));
}

std::string RunReport::text() const {
  return json_.dump(2, ' ', false, Json::error_handler_t::replace) + "\n";
}

}  // namespace farsum::command
