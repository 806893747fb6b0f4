#pragma once
// One line for "this must fail with that code, and the message names this".
#include <gtest/gtest.h>

#include <string>

#include "fmm/error.hpp"

namespace farsum::io_test {

template <class Work>
void expect_error(ErrorCode code, const std::string& named, Work&& work) {
  try {
    work();
    ADD_FAILURE() << "no error; expected " << error_name(code);
  } catch (const Error& error) {
    EXPECT_EQ(error_name(error.code()), error_name(code)) << error.what();
    EXPECT_NE(std::string(error.what()).find(named), std::string::npos) << "'" << named << "' is not in: " << error.what();
  }
}

}  // namespace farsum::io_test
