// Damaged files never crash the reader: they load, or they are refused with one of the project's own errors.
#include <gtest/gtest.h>
#include <unistd.h>

#include <filesystem>
#include <random>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/base/text.h"
#include "core/profile/definition.h"
#include "core/profile/points_file.h"
#include "tests/profile/support.h"

namespace runband {
namespace {

namespace fs = std::filesystem;

std::string damaged(std::string bytes, std::mt19937_64& draw) {
  const auto below = [&](std::size_t n) { return static_cast<std::size_t>(draw() % n); };
  const std::vector<std::string> pieces{"nan",
                                        "inf",
                                        "-",
                                        "1e308",
                                        ";",
                                        ",",
                                        "\n",
                                        "\r",
                                        "\"",
                                        "[",
                                        "]",
                                        "=",
                                        "#",
                                        "[[segment]]\n",
                                        "0",
                                        "999999",
                                        std::string(1, '\0'),
                                        "\xff",
                                        "e",
                                        "."};
  for (std::size_t k = 1 + below(6); k-- > 0 && !bytes.empty();) {
    const std::size_t at = below(bytes.size());
    switch (below(5)) {
      case 0:
        bytes[at] = static_cast<char>(draw() & 0xff);
        break;
      case 1:
        bytes.erase(at, 1 + below(20));
        break;
      case 2:
        bytes.insert(at, pieces[below(pieces.size())]);
        break;
      case 3:
        bytes.insert(at, bytes.substr(below(bytes.size()), below(60)));
        break;
      default:
        bytes[at] = static_cast<char>('0' + below(10));
        break;
    }
  }
  return bytes;
}

template <class Read>
void damage_many(const std::string& good, int times, const Read& read) {
  std::mt19937_64 draw(20);
  int refused = 0;
  for (int i = 0; i < times; ++i) {
    const std::string bytes = damaged(good, draw);
    try {
      read(bytes);
    } catch (const Error& error) {
      ++refused;
      EXPECT_FALSE(error.message().empty());
    } catch (const std::exception& other) {
      ADD_FAILURE() << "not an error of this project: " << other.what() << "\n" << bytes;
      return;
    }
  }
  EXPECT_GT(refused, times / 20);
}

void expect_finite(const Profile& profile) {
  for (const CurvePoint& p : sample_curve(*profile.curve, 0.05))
    if (!p.position.allFinite() || !p.d1.allFinite() || !p.d2.allFinite()) {
      ADD_FAILURE() << "not finite at y = " << p.y();
      return;
    }
  for (const Quantity& q : describe_profile(profile)) EXPECT_TRUE(std::isfinite(q.value)) << q.name;
}

TEST(DamagedFiles, DefinitionsLoadOrAreRefused) {
  for (const char* name : {"60E1", "S1002"}) {
    const std::string good = read_file(fs::path(RUNBAND_DATA) / "standards" / (std::string(name) + ".toml"));
    const ProfileKind kind = good.find("\"rail\"") != std::string::npos ? ProfileKind::rail : ProfileKind::wheel;
    damage_many(good, 1500, [&](const std::string& bytes) { expect_finite(parse_definition(bytes, name, kind)); });
  }
}

TEST(DamagedFiles, PointsLoadOrAreRefused) {
  std::string good = "# unit: mm\n# y_axis: field\n# noise_mm: 0.02\ny_mm;z_mm\n";
  for (const Vec2& p : sampled(*s1002()->curve, 1.0, 0.02))
    good += number_text(p.x(), 7) + ";" + number_text(p.y(), 7) + "\n";
  const fs::path file = fs::path(::testing::TempDir()) / ("runband_fuzz_" + std::to_string(::getpid()) + ".csv");
  damage_many(good, 500, [&](const std::string& bytes) {
    write_file(file, bytes);
    expect_finite(*load_profile(file.string(), ProfileKind::wheel));
  });
  fs::remove(file);
}

}  // namespace
}  // namespace runband
