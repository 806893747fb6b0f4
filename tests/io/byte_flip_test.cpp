// Deterministic damage: bytes of a valid file are flipped or its end is cut off. Each trial must either read finite values or
// throw farsum::Error. Trials run in children, so that a crash or hang inside the HDF5 library itself is noticed, counted and
// reported.
#include <gtest/gtest.h>
#include <sys/mman.h>
#include <sys/wait.h>
#include <unistd.h>

#include <cmath>
#include <csignal>
#include <fstream>
#include <random>

#include "io/conformity.hpp"
#include "io/particle_reader.hpp"
#include "tests/io/expect_error.hpp"
#include "tests/io/hdf5_builder.hpp"

#if defined(__SANITIZE_ADDRESS__)
/// A damaged size makes the HDF5 library ask for more than any memory; as outside the sanitizer, malloc then fails and it
/// reports that.
extern "C" __attribute__((visibility("default"), used)) const char* __asan_default_options() {
  return "allocator_may_return_null=1";
}
#endif

namespace farsum::io {
namespace {

using io_test::Folder;

constexpr int kTrials = 2000;
constexpr unsigned kSecondsPerTrial = 20;
enum Outcome : char { kNotRun, kRead, kError, kNotFinite, kOtherException };

std::string damaged(const std::string& bytes, int trial) {
  std::mt19937_64 random(static_cast<std::uint64_t>(trial));
  std::string copy = bytes;
  if (trial % 10 == 0) {
    copy.resize(random() % bytes.size());
    return copy;
  }
  for (int flips = 1 + trial % 3; flips > 0; --flips) {
    // Half of the flips go where the structure lies densest, the beginning of the file.
    const std::size_t range = trial % 2 ? bytes.size() : bytes.size() / 8;
    copy[random() % range] ^= static_cast<char>(1 + random() % 255);
  }
  return copy;
}

Outcome try_reading(const std::string& path) {
  ReadOptions options;
  options.memory_limit = 64u << 20;
  Outcome outcome = kRead;
  try {
    const ParticleSet set = read_particles(path, options);
    for (std::size_t i = 0; i < set.size(); ++i)
      if (!std::isfinite(set.x[i] + set.y[i] + set.z[i]) || !std::isfinite(set.charge[i])) return kNotFinite;
  } catch (const Error&) {
    outcome = kError;
  } catch (...) {
    return kOtherException;
  }
  try {
    inspect(path, options);
    check_conformity(path, options);
  } catch (const Error&) {
    outcome = kError;
  } catch (...) {
    return kOtherException;
  }
  return outcome;
}

void run_from(int first, const std::string& bytes, const std::string& path, char* outcomes) {
  for (int trial = first; trial < kTrials; ++trial) {
    alarm(kSecondsPerTrial);
    std::ofstream(path, std::ios::binary) << damaged(bytes, trial);
    outcomes[trial] = try_reading(path);
  }
}

TEST(ByteFlips, EndInValuesOrErrors) {
  const Folder folder;
  io_test::write_bunch(folder.file("good.h5"), 20);
  std::ifstream stream(folder.file("good.h5"), std::ios::binary);
  const std::string bytes(std::istreambuf_iterator<char>(stream), {});
  char* outcomes = static_cast<char*>(mmap(nullptr, kTrials, PROT_READ | PROT_WRITE, MAP_SHARED | MAP_ANONYMOUS, -1, 0));
  ASSERT_NE(outcomes, MAP_FAILED);
  int crashes = 0, hangs = 0, next = 0;
  while (next < kTrials) {
    const pid_t child = fork();
    if (child == 0) {
      run_from(next, bytes, folder.file("bad.h5"), outcomes);
      _exit(0);
    }
    int status = 0;
    waitpid(child, &status, 0);
    while (next < kTrials && outcomes[next] != kNotRun) ++next;
    if (next == kTrials) break;
    const bool hang = WIFSIGNALED(status) && WTERMSIG(status) == SIGALRM;
    (hang ? hangs : crashes) += 1;
    ADD_FAILURE() << "trial " << next << (hang ? " hangs" : " crashes") << ", status " << status;
    ++next;
  }
  int counts[5] = {};
  for (int trial = 0; trial < kTrials; ++trial) ++counts[static_cast<int>(outcomes[trial])];
  munmap(outcomes, kTrials);
  RecordProperty("errors", counts[kError]);
  RecordProperty("read", counts[kRead]);
  std::printf("%d trials: %d errors, %d read, %d crashes, %d hangs\n", kTrials, counts[kError], counts[kRead], crashes, hangs);
  EXPECT_EQ(counts[kNotFinite], 0);
  EXPECT_EQ(counts[kOtherException], 0);
  EXPECT_GT(counts[kError], kTrials / 4);
  EXPECT_GT(counts[kRead], 0);
}

}  // namespace
}  // namespace farsum::io
