#include "io/openpmd/layout.hpp"

#include <fmt/format.h>

#include <algorithm>

namespace farsum::io::openpmd {
namespace {

using hdf5::join;

bool is_digit(char letter) {
  return letter >= '0' && letter <= '9';
}

std::string without_zeros(const std::string& digits) {
  const std::size_t first = digits.find_first_not_of('0');
  return first == std::string::npos ? "0" : digits.substr(first);
}

bool numerically_less(const std::string& a, const std::string& b) {
  const std::string left = without_zeros(a), right = without_zeros(b);
  if (left.size() != right.size()) return left.size() < right.size();
  return left == right ? a < b : left < right;
}

/// The parts of a base path around %T: "/data/" + "" + %T + "" + "/".
struct Pattern {
  std::string folder, before, after, rest;
};

Pattern split_pattern(const std::string& base_path) {
  const std::size_t mark = base_path.find("%T");
  const std::size_t slash = base_path.rfind('/', mark);
  const std::size_t next = std::min(base_path.find('/', mark), base_path.size());
  Pattern pattern;
  pattern.folder = slash == std::string::npos ? "/" : base_path.substr(0, slash + 1);
  pattern.before =
      base_path.substr(slash == std::string::npos ? 0 : slash + 1, mark - (slash == std::string::npos ? 0 : slash + 1));
  pattern.after = base_path.substr(mark + 2, next - mark - 2);
  pattern.rest = base_path.substr(next);
  return pattern;
}

/// Digits of an iteration in the name of a child, or empty.
std::string iteration_in(const std::string& child, const Pattern& pattern) {
  const std::size_t around = pattern.before.size() + pattern.after.size();
  if (child.size() <= around || !child.starts_with(pattern.before) || !child.ends_with(pattern.after)) return {};
  const std::string digits = child.substr(pattern.before.size(), child.size() - around);
  return std::all_of(digits.begin(), digits.end(), is_digit) && digits.size() <= 40 ? digits : std::string();
}

std::vector<std::string> list_iterations(const hdf5::InputFile& file, const std::string& base_path) {
  if (base_path.find("%T") == std::string::npos) return {std::string()};
  const Pattern pattern = split_pattern(base_path);
  const std::string folder = join("/", pattern.folder);
  std::vector<std::string> names;
  if (file.is_group(folder)) {
    for (const std::string& child : file.children(folder)) {
      const std::string digits = iteration_in(child, pattern);
      if (!digits.empty()) names.push_back(digits);
    }
  }
  if (names.empty()) {
    throw Error(ErrorCode::item_missing, fmt::format("holds no iteration; basePath is '{}'", base_path), file.path(), folder,
                {});
  }
  std::sort(names.begin(), names.end(), numerically_less);
  return names;
}

std::string list_of(const std::vector<std::string>& names) {
  constexpr std::size_t kShown = 12;
  std::string text;
  for (std::size_t i = 0; i < std::min(names.size(), kShown); ++i) text += (i ? ", " : "") + names[i];
  if (names.size() > kShown) text += fmt::format(", ... {} ({} in all)", names.back(), names.size());
  return text;
}

int major_of(const std::string& version) {
  if (version.empty() || !is_digit(version[0]) || (version.size() > 1 && version[1] != '.')) return -1;
  return version[0] - '0';
}

std::string last_piece(const std::string& path) {
  return path.substr(path.rfind('/') + 1);
}

}  // namespace

std::string word(const std::string& name) {
  std::string text = name;
  for (char& letter : text)
    if (!is_digit(letter) && !(letter >= 'a' && letter <= 'z') && !(letter >= 'A' && letter <= 'Z')) letter = '_';
  return text.empty() ? "particles" : text;
}

Layout find_layout(const hdf5::InputFile& file) {
  const auto version = file.text("/", "openPMD");
  if (!version) {
    throw Error(ErrorCode::format_unsupported, "is an HDF5 file without the attribute openPMD of its root group", file.path(),
                {}, "particle files must follow the openPMD standard 1.x or 2.x");
  }
  Layout layout;
  layout.version = *version;
  layout.major_version = major_of(*version);
  if (layout.major_version != 1 && layout.major_version != 2) {
    throw Error(ErrorCode::format_unsupported, fmt::format("openPMD version '{}' is not read", *version), file.path(),
                "/@openPMD", "versions 1.x and 2.x are read");
  }
  const auto base_path = file.text("/", "basePath");
  if (!base_path) layout.notes.push_back("The file has no basePath; /data/%T/ is taken.");
  layout.base_path = base_path.value_or("/data/%T/");
  const auto particles_path = file.text("/", "particlesPath");
  if (!particles_path) layout.notes.push_back("The file has no particlesPath; particles/ is taken.");
  layout.particles_path = particles_path.value_or("particles/");
  layout.iterations = list_iterations(file, layout.base_path);
  return layout;
}

std::string iteration_group(const Layout& layout, const std::string& iteration) {
  std::string base = layout.base_path;
  if (const std::size_t mark = base.find("%T"); mark != std::string::npos) base.replace(mark, 2, iteration);
  return join("/", base);
}

std::string choose_iteration(const hdf5::InputFile& file, const Layout& layout, const ReadOptions& options) {
  if (!options.iteration) {
    if (layout.iterations.size() == 1) return layout.iterations.front();
    throw Error(ErrorCode::choice_needed, fmt::format("holds several iterations: {}", list_of(layout.iterations)), file.path(),
                {}, "choose one with --iteration");
  }
  for (const std::string& name : layout.iterations)
    if (name == *options.iteration) return name;
  for (const std::string& name : layout.iterations) {
    const bool digits =
        !options.iteration->empty() && std::all_of(options.iteration->begin(), options.iteration->end(), is_digit);
    if (digits && !name.empty() && without_zeros(name) == without_zeros(*options.iteration)) return name;
  }
  const bool unnamed = layout.iterations.size() == 1 && layout.iterations.front().empty();
  throw Error(ErrorCode::choice_needed,
              unnamed ? std::string("its only iteration has no number")
                      : fmt::format("has no iteration '{}'; it holds {}", *options.iteration, list_of(layout.iterations)),
              file.path(), {}, unnamed ? "leave out --iteration" : "choose one of these with --iteration");
}

std::vector<SpeciesPlace> find_species(const hdf5::InputFile& file, const Layout& layout, const std::string& iteration) {
  const std::string root = join(iteration_group(layout, iteration), layout.particles_path);
  if (!file.is_group(root)) {
    throw Error(ErrorCode::item_missing, "the group of the particles is not in the file", file.path(), root, {});
  }
  if (file.kind(join(root, "position")) != hdf5::Kind::none) {
    const auto type = file.text(root, "speciesType");
    return {{word(type && !type->empty() ? *type : last_piece(root)), root}};
  }
  std::vector<SpeciesPlace> found;
  for (const std::string& child : file.children(root)) {
    const std::string group = join(root, child);
    if (file.is_group(group) && file.kind(join(group, "position")) != hdf5::Kind::none) found.push_back({child, group});
  }
  if (found.empty()) {
    throw Error(ErrorCode::item_missing, "holds no particle species (no group with a record 'position')", file.path(), root,
                {});
  }
  return found;
}

std::vector<SpeciesPlace> select_species(const hdf5::InputFile& file, const std::vector<SpeciesPlace>& all,
                                         const std::vector<std::string>& names) {
  if (names.empty()) return all;
  std::vector<std::string> there;
  for (const SpeciesPlace& place : all) there.push_back(place.name);
  for (const std::string& name : names) {
    if (std::find(there.begin(), there.end(), name) == there.end()) {
      throw Error(ErrorCode::choice_needed, fmt::format("has no species '{}'; it holds {}", name, list_of(there)), file.path(),
                  {}, "choose among these with --species");
    }
  }
  std::vector<SpeciesPlace> chosen;
  for (const SpeciesPlace& place : all)
    if (std::find(names.begin(), names.end(), place.name) != names.end()) chosen.push_back(place);
  return chosen;
}

}  // namespace farsum::io::openpmd
