// Files are written whole or not at all.
#include "core/base/file.h"

#include <gtest/gtest.h>
#include <sys/resource.h>
#include <unistd.h>

#include <csignal>
#include <filesystem>
#include <fstream>
#include <stdexcept>
#include <string>

#include "core/base/error.h"

namespace runband {
namespace {

namespace fs = std::filesystem;

// A folder of its own for every test, removed at the end.
class Files : public ::testing::Test {
 protected:
  void SetUp() override {
    const auto* test = ::testing::UnitTest::GetInstance()->current_test_info();
    folder = fs::temp_directory_path() / ("runband_files_" + std::to_string(::getpid()) + "_" + test->name());
    fs::create_directories(folder);
  }
  void TearDown() override {
    std::error_code ignored;
    fs::permissions(folder, fs::perms::owner_all, ignored);
    fs::remove_all(folder, ignored);
  }
  std::size_t entries() const {
    return static_cast<std::size_t>(std::distance(fs::directory_iterator(folder), fs::directory_iterator()));
  }
  fs::path folder;
};

template <typename Call>
FileError file_error(Call call) {
  try {
    call();
  } catch (const FileError& error) {
    return error;
  }
  return {ErrorCode::file_wrong_kind, "nothing was thrown", ""};
}

TEST_F(Files, ReadsBackTheBytesWritten) {
  const std::string bytes("a\0b\r\n\xff", 6);
  write_file(folder / "new" / "deep" / "x.bin", bytes);
  EXPECT_EQ(read_file(folder / "new" / "deep" / "x.bin"), bytes);
}

TEST_F(Files, AWriterThatThrowsLeavesTheOldFileAndNothingElse) {
  const fs::path path = folder / "table.csv";
  write_file(path, "old");
  EXPECT_THROW(write_file(path,
                          [](std::ostream& out) {
                            out << "half of the n";
                            throw std::runtime_error("interrupted");
                          }),
               std::runtime_error);
  EXPECT_EQ(read_file(path), "old");
  EXPECT_EQ(entries(), 1U);
}

TEST_F(Files, AWriterThatFailsItsStreamIsAFileError) {
  const fs::path path = folder / "table.csv";
  const FileError error =
      file_error([&] { write_file(path, [](std::ostream& out) { out.setstate(std::ios::badbit); }); });
  EXPECT_EQ(error.code(), ErrorCode::file_unwritable);
  EXPECT_EQ(error.exit_status(), 3);
  EXPECT_NE(error.message().find(path.string()), std::string::npos);
  EXPECT_EQ(entries(), 0U);
}

TEST_F(Files, ALibraryThatWritesByPathGetsTheSameEndingAndIsRenamed) {
  const fs::path path = folder / "mesh.ply";
  fs::path seen;
  write_file_by_path(path, [&](const fs::path& temporary) {
    seen = temporary;
    std::ofstream(temporary) << "whole";
  });
  EXPECT_EQ(seen.extension(), ".ply");
  EXPECT_EQ(seen.parent_path(), folder);
  EXPECT_NE(seen, path);
  EXPECT_FALSE(fs::exists(seen));
  EXPECT_EQ(read_file(path), "whole");
  const FileError silent = file_error([&] { write_file_by_path(path, [](const fs::path&) {}); });
  EXPECT_EQ(silent.code(), ErrorCode::file_unwritable);
  EXPECT_EQ(read_file(path), "whole");
}

TEST_F(Files, AFolderInTheWayIsNamed) {
  fs::create_directories(folder / "taken");
  const FileError write = file_error([&] { write_file(folder / "taken", "x"); });
  EXPECT_EQ(write.code(), ErrorCode::file_unwritable);
  EXPECT_NE(write.message().find("it is a folder"), std::string::npos);
  const FileError read = file_error([&] { read_file(folder / "taken"); });
  EXPECT_EQ(read.code(), ErrorCode::file_unreadable);
  EXPECT_NE(read.message().find("is a folder"), std::string::npos);
}

TEST_F(Files, AFileWhereAFolderIsNeededIsRefused) {
  write_file(folder / "file", "x");
  const FileError error = file_error([&] { write_file(folder / "file" / "below.txt", "y"); });
  EXPECT_EQ(error.code(), ErrorCode::file_unwritable);
  EXPECT_EQ(read_file(folder / "file"), "x");
}

TEST_F(Files, AMissingFileIsNamedWithTheSystemsReason) {
  const FileError error = file_error([&] { read_file(folder / "absent.csv"); });
  EXPECT_EQ(error.code(), ErrorCode::file_unreadable);
  EXPECT_NE(error.message().find("absent.csv"), std::string::npos);
  EXPECT_NE(error.message().find("No such file"), std::string::npos);
  EXPECT_FALSE(error.cure().empty());
}

TEST_F(Files, ADiskThatFillsUpMidwayLeavesTheOldFile) {
  // A limit on the file's size fails the write as a full disk does, after the first bytes have arrived.
  const fs::path path = folder / "report.html";
  write_file(path, "old");
  rlimit before{};
  ASSERT_EQ(::getrlimit(RLIMIT_FSIZE, &before), 0);
  rlimit small = before;
  small.rlim_cur = 4096;
  const auto handler = std::signal(SIGXFSZ, SIG_IGN);
  ASSERT_EQ(::setrlimit(RLIMIT_FSIZE, &small), 0);
  const FileError error = file_error([&] { write_file(path, std::string(1 << 20, 'x')); });
  ::setrlimit(RLIMIT_FSIZE, &before);
  std::signal(SIGXFSZ, handler);
  EXPECT_EQ(error.code(), ErrorCode::file_unwritable);
  EXPECT_NE(error.message().find("File too large"), std::string::npos) << error.message();
  EXPECT_EQ(read_file(path), "old");
  EXPECT_EQ(entries(), 1U);
}

TEST(DataFolder, TheEnvironmentComesFirst) {
  ::setenv("RUNBAND_DATA", "/somewhere/else", 1);
  EXPECT_EQ(data_folder(), fs::path("/somewhere/else"));
  ::unsetenv("RUNBAND_DATA");
  EXPECT_EQ(data_folder(), fs::path(RUNBAND_DATA));
}

}  // namespace
}  // namespace runband
