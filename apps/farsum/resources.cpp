#include "apps/farsum/resources.hpp"

#include <fmt/format.h>
#include <sched.h>
#include <sys/resource.h>
#include <unistd.h>

#include <algorithm>
#include <charconv>
#include <cmath>
#include <fstream>
#include <limits>
#include <optional>
#include <sstream>
#include <stdexcept>
#include <vector>

namespace farsum::command {
namespace {

constexpr std::uint64_t kNoLimit = std::numeric_limits<std::uint64_t>::max();

std::optional<std::uint64_t> read_number(const std::string& path) {
  std::ifstream in(path);
  std::uint64_t value = 0;
  if (in >> value) return value;
  return std::nullopt;  // missing, or the word "max"
}

/// Value of `key` in a file of lines "key value ...".
std::optional<std::uint64_t> read_keyed(const std::string& path, const std::string& key) {
  std::ifstream in(path);
  std::string line, word;
  while (std::getline(in, line)) {
    std::istringstream fields(line);
    std::uint64_t value = 0;
    if (fields >> word && word == key && fields >> value) return value;
  }
  return std::nullopt;
}

/// Folders of this process's control group for `controller` and of all groups around it, innermost first. The second version of
/// control groups has one tree (controller list empty), the first one a tree for each controller.
std::vector<std::string> group_folders(const std::string& controller, bool second_version) {
  std::ifstream in("/proc/self/cgroup");
  std::string line, path;
  while (std::getline(in, line)) {
    const std::size_t first = line.find(':'), second = line.find(':', first + 1);
    if (first == std::string::npos || second == std::string::npos) continue;
    const std::string names = fmt::format(",{},", line.substr(first + 1, second - first - 1));
    if (second_version ? names == ",," : names.find(fmt::format(",{},", controller)) != std::string::npos)
      path = line.substr(second + 1);
  }
  if (path.find("..") != std::string::npos) path.clear();  // a group outside this view: only the visible root counts
  const std::string root = second_version ? "/sys/fs/cgroup" : fmt::format("/sys/fs/cgroup/{}", controller);
  std::vector<std::string> folders;
  while (path.size() > 1) {
    folders.push_back(root + path);
    path.resize(path.rfind('/'));
  }
  folders.push_back(root);
  return folders;
}

int affinity_count() {
  for (int capacity = 1024; capacity <= (1 << 18); capacity *= 4) {
    cpu_set_t* set = CPU_ALLOC(capacity);
    if (set == nullptr) break;
    const std::size_t bytes = CPU_ALLOC_SIZE(capacity);
    const int count = sched_getaffinity(0, bytes, set) == 0 ? CPU_COUNT_S(bytes, set) : 0;
    CPU_FREE(set);
    if (count > 0) return count;
  }
  return std::max(1, int(sysconf(_SC_NPROCESSORS_ONLN)));
}

/// Processors' worth of time that a quota allows, infinite when there is none.
double quota_processors() {
  double least = std::numeric_limits<double>::infinity();
  for (const std::string& folder : group_folders("cpu", true)) {
    std::ifstream in(folder + "/cpu.max");
    double quota = 0, period = 0;
    if (in >> quota >> period && period > 0) least = std::min(least, quota / period);
  }
  for (const std::string& folder : group_folders("cpu", false)) {
    std::ifstream in(folder + "/cpu.cfs_quota_us");
    double quota = 0;
    const auto period = read_number(folder + "/cpu.cfs_period_us");
    if (in >> quota && quota > 0 && period && *period > 0) least = std::min(least, quota / double(*period));
  }
  return least;
}

/// Room under one group's limit; file pages that the kernel can drop count as free.
std::uint64_t group_room(std::optional<std::uint64_t> limit, std::optional<std::uint64_t> used,
                         std::optional<std::uint64_t> droppable) {
  if (!limit || !used) return kNoLimit;
  const std::uint64_t held = *used - std::min(*used, droppable.value_or(0));
  return *limit - std::min(*limit, held);
}

std::uint64_t container_room() {
  std::uint64_t room = kNoLimit;
  for (const std::string& folder : group_folders("memory", true))
    room = std::min(room, group_room(read_number(folder + "/memory.max"), read_number(folder + "/memory.current"),
                                     read_keyed(folder + "/memory.stat", "inactive_file")));
  for (const std::string& folder : group_folders("memory", false))
    room = std::min(room,
                    group_room(read_number(folder + "/memory.limit_in_bytes"), read_number(folder + "/memory.usage_in_bytes"),
                               read_keyed(folder + "/memory.stat", "total_inactive_file")));
  return room;
}

std::uint64_t address_space_room() {
  rlimit limit{};
  if (getrlimit(RLIMIT_AS, &limit) != 0 || limit.rlim_cur == RLIM_INFINITY) return kNoLimit;
  const std::uint64_t pages = read_number("/proc/self/statm").value_or(0);
  const std::uint64_t used = pages * std::uint64_t(sysconf(_SC_PAGESIZE));
  return limit.rlim_cur - std::min<std::uint64_t>(limit.rlim_cur, used);
}

}  // namespace

int usable_processors() {
  const double quota = std::ceil(quota_processors());
  const int count = affinity_count();
  return quota < double(count) ? std::max(1, int(quota)) : count;
}

std::uint64_t free_memory() {
  const auto available = read_keyed("/proc/meminfo", "MemAvailable:");
  const std::uint64_t machine = available ? *available * 1024 : kNoLimit;
  return std::min({machine, container_room(), address_space_room()});
}

std::uint64_t peak_resident_bytes() {
  rusage usage{};
  return getrusage(RUSAGE_SELF, &usage) == 0 ? std::uint64_t(usage.ru_maxrss) * 1024 : 0;
}

std::uint64_t parse_size(const std::string& text) {
  double value = 0;
  const auto [end, failure] = std::from_chars(text.data(), text.data() + text.size(), value);
  std::string suffix(end, text.data() + text.size());
  if (failure != std::errc() || !(value >= 0))
    throw std::invalid_argument("'" + text + "' is not a size; write it like 4GiB or 500MB");
  suffix.erase(std::remove(suffix.begin(), suffix.end(), ' '), suffix.end());
  double factor = 1;
  if (!suffix.empty() && suffix != "B" && suffix != "b") {
    const std::size_t power = std::string("KMGT").find(char(std::toupper(static_cast<unsigned char>(suffix[0]))));
    const std::string rest = suffix.substr(1);
    if (power == std::string::npos || (rest != "" && rest != "iB" && rest != "i" && rest != "B" && rest != "b"))
      throw std::invalid_argument("'" + text + "' has no unit of size known here; use B, KiB, MiB, GiB, TiB, KB, MB, GB or TB");
    factor = std::pow(rest == "B" || rest == "b" ? 1000.0 : 1024.0, double(power + 1));
  }
  if (value * factor >= 9.0e18) throw std::invalid_argument("'" + text + "' is larger than any memory");
  return std::uint64_t(value * factor);
}

std::string machine_name() {
  std::ifstream in("/proc/cpuinfo");
  std::string line, model = "unknown processor";
  while (std::getline(in, line)) {
    const std::size_t colon = line.find(": ");
    if (colon != std::string::npos && line.rfind("model name", 0) == 0) {
      model = line.substr(colon + 2);
      break;
    }
  }
  return fmt::format("{}, {} processors usable", model, usable_processors());
}

}  // namespace farsum::command
