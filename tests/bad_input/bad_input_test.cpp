// Every line of table.txt is a test: the program is run on the mistake, and its answer is held against the line.
#include <gtest/gtest.h>
#include <sys/wait.h>
#include <unistd.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <map>
#include <sstream>
#include <string>
#include <vector>

namespace {

namespace fs = std::filesystem;

struct Mistake {
  std::string name, arguments, part;
  int status = 0;
  int line = 0;
};

std::string bytes_of(const fs::path& path) {
  std::ifstream stream(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(stream), {}};
}

std::string trimmed(const std::string& text) {
  const auto first = text.find_first_not_of(" \t");
  return first == std::string::npos ? "" : text.substr(first, text.find_last_not_of(" \t") - first + 1);
}

/// name | arguments | exit status | part of the message; # starts a comment.
std::vector<Mistake> read_table(const fs::path& path) {
  std::vector<Mistake> mistakes;
  std::ifstream stream(path);
  int number = 0;
  for (std::string line; std::getline(stream, line);) {
    ++number;
    if (line.empty() || line.front() == '#') continue;
    std::vector<std::string> cells;
    std::istringstream row(line);
    for (std::string cell; std::getline(row, cell, '|');) cells.push_back(trimmed(cell));
    if (cells.size() != 4) throw std::runtime_error(path.string() + ":" + std::to_string(number) + ": not four cells");
    mistakes.push_back({cells[0], cells[1], cells[3], std::stoi(cells[2]), number});
  }
  return mistakes;
}

/// Relative path and content of everything below `folder`.
std::map<std::string, std::string> contents(const fs::path& folder) {
  std::map<std::string, std::string> all;
  for (const auto& entry : fs::recursive_directory_iterator(folder))
    all[fs::relative(entry.path(), folder).string()] = entry.is_regular_file() ? bytes_of(entry.path()) : "<folder>";
  return all;
}

class BadInput : public testing::Test {
 public:
  explicit BadInput(Mistake mistake) : mistake_(std::move(mistake)) {}

  void TestBody() override {
    const fs::path place = fs::temp_directory_path() / ("runband_bad_input_" + std::to_string(::getpid()));
    fs::remove_all(place);
    const fs::path inside = place / "work";
    fs::create_directories(inside / "a_folder");
    fs::copy_file(fs::path(RUNBAND_TESTS) / "bad_input/cases/good.toml", inside / "good.toml");
    fs::copy_file(fs::path(RUNBAND_TESTS) / "bad_input/cases/good_bench.toml", inside / "bench.toml");
    std::ofstream(inside / "a_file") << "a file\n";
    const auto before = contents(inside);

    const std::string command = "cd '" + inside.string() +
                                "' && export CASES='" RUNBAND_TESTS "/bad_input/cases' && '" + RUNBAND_PROGRAM + "' " +
                                mistake_.arguments + " >'" + (place / "out").string() + "' 2>'" +
                                (place / "err").string() + "' </dev/null";
    const int status = std::system(command.c_str());
    const std::string said = bytes_of(place / "err");
    SCOPED_TRACE("table.txt:" + std::to_string(mistake_.line) + ": runband " + mistake_.arguments + "\n" + said);

    ASSERT_TRUE(WIFEXITED(status));
    EXPECT_EQ(WEXITSTATUS(status), mistake_.status);
    EXPECT_NE(said.find(mistake_.part), std::string::npos) << "expected to read: " << mistake_.part;
    EXPECT_EQ(said.rfind("runband: ", 0), 0U) << "the message does not start with the program's name";
    EXPECT_NE(said.find("\n  "), std::string::npos) << "the message does not say what to do";
    EXPECT_EQ(bytes_of(place / "out"), "") << "a failure printed a result";
    EXPECT_EQ(contents(inside), before) << "a failure left something behind";
    fs::remove_all(place);
  }

 private:
  Mistake mistake_;
};

}  // namespace

int main(int argc, char** argv) {
  testing::InitGoogleTest(&argc, argv);
  const fs::path table = fs::path(RUNBAND_TESTS) / "bad_input/table.txt";
  for (const Mistake& mistake : read_table(table))
    testing::RegisterTest("BadInput", mistake.name.c_str(), nullptr, nullptr, table.c_str(), mistake.line,
                          [mistake]() -> BadInput* { return new BadInput(mistake); });
  return RUN_ALL_TESTS();
}
