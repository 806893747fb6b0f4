#include "fmm/base/cpu.hpp"

#include <gtest/gtest.h>

#include <cstdlib>
#include <optional>
#include <string>

#include "fmm/error.hpp"
#include "fmm/kernels/dispatch.hpp"

namespace farsum {
namespace {

/// The environment variable set to a word (or unset) for the life of the object.
class TargetVariable {
 public:
  explicit TargetVariable(const char* word) {
    if (const char* old = std::getenv(kName)) old_ = old;
    word ? setenv(kName, word, 1) : unsetenv(kName);
  }
  ~TargetVariable() { old_ ? setenv(kName, old_->c_str(), 1) : unsetenv(kName); }
  TargetVariable(const TargetVariable&) = delete;
  TargetVariable& operator=(const TargetVariable&) = delete;

 private:
  static constexpr const char* kName = "FARSUM_CPU_TARGET";
  std::optional<std::string> old_;
};

TEST(CpuTarget, PortableIsSupportedEverywhere) {
  EXPECT_TRUE(cpu_supports(CpuTarget::portable));
}

TEST(CpuTarget, AutomaticTakesTheWidestThatTheMachineHas) {
  const TargetVariable unset(nullptr);
  const CpuTarget best = cpu_supports(CpuTarget::avx512) ? CpuTarget::avx512
                         : cpu_supports(CpuTarget::avx2) ? CpuTarget::avx2
                                                         : CpuTarget::portable;
  EXPECT_EQ(resolve_cpu_target(CpuTarget::automatic), best);
}

TEST(CpuTarget, EnvironmentVariableForcesATarget) {
  const TargetVariable word("portable");
  EXPECT_EQ(resolve_cpu_target(CpuTarget::automatic), CpuTarget::portable);
}

TEST(CpuTarget, AnExplicitOptionBeatsTheEnvironment) {
  const TargetVariable word("avx512");
  EXPECT_EQ(resolve_cpu_target(CpuTarget::portable), CpuTarget::portable);
}

TEST(CpuTarget, UnknownWordInTheEnvironmentIsNamed) {
  for (const char* text : {"sse9", "", "AVX2", "automatic"}) {
    const TargetVariable word(text);
    try {
      resolve_cpu_target(CpuTarget::automatic);
      FAIL() << "accepted \"" << text << "\"";
    } catch (const Error& error) {
      EXPECT_EQ(error.code(), ErrorCode::invalid_argument);
      EXPECT_NE(std::string(error.what()).find('"' + std::string(text) + '"'), std::string::npos) << error.what();
    }
  }
}

TEST(CpuTarget, ATargetThatTheMachineLacksIsRefused) {
  for (CpuTarget target : {CpuTarget::avx2, CpuTarget::avx512}) {
    if (cpu_supports(target)) {
      EXPECT_EQ(resolve_cpu_target(target), target);
    } else {
      EXPECT_THROW(resolve_cpu_target(target), Error);
    }
  }
}

TEST(CpuTarget, KernelTablesCarryTheNameOfTheirTarget) {
  for (CpuTarget target : {CpuTarget::portable, CpuTarget::avx2, CpuTarget::avx512}) {
    if (!cpu_supports(target)) continue;
    EXPECT_STREQ(kernels::kernel_table(target).name, cpu_target_name(target));
  }
}

}  // namespace
}  // namespace farsum
