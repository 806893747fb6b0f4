#include "io/openpmd/rules.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <functional>

#include "io/openpmd/known_records.hpp"
#include "io/openpmd/layout.hpp"
#include "io/openpmd/record_rules.hpp"

namespace farsum::io::openpmd {
namespace {

using hdf5::join;

bool ends_with_slash(const std::string& text) {
  return !text.empty() && text.back() == '/';
}

void check_root(const hdf5::InputFile& file, const Layout& layout, Findings& findings) {
  for (const char* name : {"openPMD", "basePath", "iterationEncoding", "iterationFormat"})
    if (!file.text("/", name))
      findings.error("root_attribute", "/", fmt::format("the required text attribute '{}' is missing", name));
  for (const char* name : {"author", "software", "softwareVersion", "date"})
    if (!file.text("/", name))
      findings.warning("root_attribute", "/", fmt::format("the recommended text attribute '{}' is missing", name));
  if (layout.major_version == 1) {
    const bool extension = file.has_attribute("/", "openPMDextension") && !file.text("/", "openPMDextension");
    if (!extension) findings.error("root_attribute", "/", "the required number 'openPMDextension' is missing");
    if (layout.base_path != "/data/%T/")
      findings.error("base_path", "/", fmt::format("basePath is '{}'; version 1 fixes it to '/data/%T/'", layout.base_path));
  }
  const std::string encoding = file.text("/", "iterationEncoding").value_or("groupBased");
  if (encoding != "groupBased" && encoding != "fileBased")
    findings.error("root_attribute", "/", fmt::format("iterationEncoding is '{}'", encoding));
  for (const char* name : {"particlesPath", "meshesPath"}) {
    const auto path = file.text("/", name);
    if (path && !ends_with_slash(*path))
      findings.error("paths", "/", fmt::format("{} '{}' does not end with a slash", name, *path));
  }
}

void check_iteration(const hdf5::InputFile& file, const Layout& layout, const std::string& iteration, Findings& findings) {
  const std::string group = iteration_group(layout, iteration);
  if (iteration.size() > 1 && iteration.front() == '0')
    findings.error("iteration_name", group, "the name of the iteration is padded with zeros");
  for (const char* name : {"time", "dt", "timeUnitSI"}) {
    if (!file.has_attribute(group, name))
      findings.error("iteration_attribute", group, fmt::format("the required number '{}' is missing", name));
  }
  for (const char* name : {"particlesPath", "meshesPath"}) {
    const auto path = file.text("/", name);
    if (path && !file.is_group(join(group, *path)))
      findings.error("paths", join(group, *path), fmt::format("the group of {} is missing", name));
  }
}

}  // namespace

void check_rules(const std::string& path, const ReadOptions& options, std::vector<Finding>& list) {
  const hdf5::Session session;
  const hdf5::InputFile file(path, options.allow_external);
  Findings findings(list);
  findings.guarded("/", [&] {
    const Layout layout = find_layout(file);
    check_root(file, layout, findings);
    for (const std::string& iteration : layout.iterations) {
      findings.guarded(iteration_group(layout, iteration), [&] {
        check_iteration(file, layout, iteration, findings);
        for (const SpeciesPlace& place : find_species(file, layout, iteration)) {
          findings.guarded(place.group, [&] { check_species(file, layout, place, findings); });
        }
      });
    }
  });
}

}  // namespace farsum::io::openpmd
