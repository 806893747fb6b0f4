// Outputs appear whole or not at all.
#include "io/output_file.hpp"

#include <gtest/gtest.h>
#include <sys/stat.h>
#include <unistd.h>

#include <filesystem>
#include <fstream>

#include "tests/io/expect_error.hpp"
#include "tests/io/hdf5_builder.hpp"

namespace farsum::io {
namespace {

using io_test::expect_error;
using io_test::Folder;

void write_text(const std::string& path, const std::string& text) {
  std::ofstream(path) << text;
}

std::string read_text(const std::string& path) {
  std::ifstream stream(path);
  return {std::istreambuf_iterator<char>(stream), {}};
}

TEST(OutputFile, CommitPutsTheTemporaryInPlace) {
  const Folder folder;
  std::vector<std::string> told;
  OutputFile file(check_output_target(folder.file("a.h5"), false, 0), false,
                  [&](const std::string& path) { told.push_back(path); });
  write_text(file.temporary(), "new");
  file.commit();
  EXPECT_EQ(read_text(folder.file("a.h5")), "new");
  EXPECT_EQ(folder.names(), std::vector<std::string>{"a.h5"});
  ASSERT_EQ(told.size(), 2u);
  EXPECT_TRUE(std::filesystem::path(told[0]).is_absolute());
  EXPECT_EQ(told[1], "");
}

TEST(OutputFile, WithoutCommitNothingIsLeft) {
  const Folder folder;
  write_text(folder.file("a.h5"), "old");
  {
    OutputFile file(check_output_target(folder.file("a.h5"), true, 0), true);
    write_text(file.temporary(), "half");
    EXPECT_EQ(folder.names().size(), 2u);
  }
  EXPECT_EQ(folder.names(), std::vector<std::string>{"a.h5"});
  EXPECT_EQ(read_text(folder.file("a.h5")), "old");
}

TEST(OutputFile, ReplacesOnlyWhenAsked) {
  const Folder folder;
  write_text(folder.file("a.h5"), "old");
  expect_error(ErrorCode::file_exists, "--overwrite", [&] { check_output_target(folder.file("a.h5"), false, 0); });
  OutputFile file(check_output_target(folder.file("a.h5"), true, 0), true);
  write_text(file.temporary(), "new");
  file.commit();
  EXPECT_EQ(read_text(folder.file("a.h5")), "new");
}

TEST(OutputFile, KeepsATargetThatAppearedMeanwhile) {
  const Folder folder;
  OutputFile file(check_output_target(folder.file("a.h5"), false, 0), false);
  write_text(file.temporary(), "new");
  write_text(folder.file("a.h5"), "other");
  expect_error(ErrorCode::file_exists, "a.h5", [&] { file.commit(); });
  EXPECT_EQ(read_text(folder.file("a.h5")), "other");
}

TEST(OutputFile, FollowsASymbolicLinkOnce) {
  const Folder folder;
  write_text(folder.file("real.h5"), "old");
  std::filesystem::create_symlink("real.h5", folder.file("link.h5"));
  OutputFile file(check_output_target(folder.file("link.h5"), true, 0), true);
  write_text(file.temporary(), "new");
  file.commit();
  EXPECT_TRUE(std::filesystem::is_symlink(folder.file("link.h5")));
  EXPECT_EQ(read_text(folder.file("real.h5")), "new");
  std::filesystem::create_symlink("link.h5", folder.file("second.h5"));
  expect_error(ErrorCode::file_not_writable, "link to a symbolic link",
               [&] { check_output_target(folder.file("second.h5"), true, 0); });
}

TEST(OutputFile, RefusesTheInputUnderAnyName) {
  const Folder folder;
  write_text(folder.file("in.h5"), "data");
  std::filesystem::create_hard_link(folder.file("in.h5"), folder.file("same.h5"));
  expect_error(ErrorCode::file_not_writable, "is the input itself",
               [&] { check_output_target(folder.file("same.h5"), true, 0, {folder.file("in.h5")}); });
}

TEST(OutputFile, RefusesFoldersAndDevicesAndMissingFolders) {
  const Folder folder;
  expect_error(ErrorCode::file_not_writable, "is a folder", [&] { check_output_target(folder.path(), true, 0); });
  expect_error(ErrorCode::file_not_writable, "no regular file", [] { check_output_target("/dev/null", true, 0); });
  expect_error(ErrorCode::file_not_writable, "folder cannot be used",
               [&] { check_output_target(folder.file("none/a.h5"), true, 0); });
}

TEST(OutputFile, RefusesAFolderWithoutPermission) {
  if (geteuid() == 0) GTEST_SKIP() << "root may write everywhere";
  const Folder folder;
  chmod(folder.path().c_str(), 0555);
  expect_error(ErrorCode::file_not_writable, "cannot be written", [&] { check_output_target(folder.file("a.h5"), false, 0); });
}

TEST(OutputFile, RefusesMoreThanTheDiskHolds) {
  const Folder folder;
  expect_error(ErrorCode::disk_full, "MiB left",
               [&] { check_output_target(folder.file("a.h5"), false, std::uint64_t{1} << 60); });
}

}  // namespace
}  // namespace farsum::io
