// Every ErrorCode has a name and a meaning of its own. The codes are read from the header's text, so a new one cannot be
// forgotten.
#include <gtest/gtest.h>

#include <cctype>
#include <fstream>
#include <map>
#include <regex>
#include <set>
#include <string>

#include "fmm/error.hpp"

namespace farsum {
namespace {

/// Enumerators "name = number" between "enum class ErrorCode" and the closing brace, comments left out.
std::map<std::string, int> declared_codes() {
  std::ifstream header(FARSUM_SOURCE_DIR "/fmm/error.hpp");
  std::map<std::string, int> codes;
  bool inside = false;
  const std::regex enumerator(R"(^\s*(\w+)\s*=\s*(\d+)\s*,?)");
  for (std::string line; std::getline(header, line);) {
    if (line.find("enum class ErrorCode") != std::string::npos) inside = true;
    std::smatch match;
    const std::string code = line.substr(0, line.find("//"));
    if (inside && std::regex_search(code, match, enumerator)) codes[match[1]] = std::stoi(match[2]);
    if (inside && line.find("};") != std::string::npos) break;
  }
  return codes;
}

TEST(ErrorCodes, HeaderIsReadWhole) {
  const auto codes = declared_codes();
  EXPECT_GE(codes.size(), 28u);
  EXPECT_EQ(codes.at("invalid_argument"), 1);
  EXPECT_EQ(codes.at("disk_full"), 116);
}

TEST(ErrorCodes, NumbersAreDistinct) {
  std::set<int> numbers;
  for (const auto& [name, number] : declared_codes()) EXPECT_TRUE(numbers.insert(number).second) << name;
}

TEST(ErrorCodes, NameIsTheEnumerator) {
  for (const auto& [name, number] : declared_codes()) EXPECT_EQ(error_name(ErrorCode(number)), name);
}

TEST(ErrorCodes, MeaningsAreDistinctSentences) {
  std::set<std::string> meanings{std::string(error_meaning(ErrorCode(9999)))};
  for (const auto& [name, number] : declared_codes()) {
    const std::string meaning(error_meaning(ErrorCode(number)));
    EXPECT_TRUE(meanings.insert(meaning).second) << name << ": " << meaning;
    ASSERT_GE(meaning.size(), 10u) << name;
    EXPECT_TRUE(std::isupper(static_cast<unsigned char>(meaning.front()))) << meaning;
    EXPECT_EQ(meaning.back(), '.') << meaning;
  }
}

TEST(ErrorCodes, UnknownNumberHasItsOwnWord) {
  for (const auto& [name, number] : declared_codes())
    EXPECT_NE(error_name(ErrorCode(9999)), error_name(ErrorCode(number))) << name;
}

TEST(ErrorCodes, MessageHoldsFileItemFactAndRemedy) {
  const Error error(ErrorCode::item_missing, "no such data set", "bunch.h5", "/data/0/charge", "name the charge");
  EXPECT_STREQ(error.what(), "bunch.h5: /data/0/charge: no such data set; name the charge");
  EXPECT_EQ(error.code(), ErrorCode::item_missing);
  EXPECT_EQ(error.message(), "no such data set");
  EXPECT_EQ(error.file(), "bunch.h5");
  EXPECT_EQ(error.item(), "/data/0/charge");
  EXPECT_EQ(error.remedy(), "name the charge");
}

}  // namespace
}  // namespace farsum
