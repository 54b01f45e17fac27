// Mesh files read back by small readers written here from the formats' own descriptions.
#include <gtest/gtest.h>
#include <unistd.h>

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <cstring>
#include <filesystem>
#include <nlohmann/json.hpp>
#include <sstream>
#include <string>
#include <vector>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/surface/bytes.h"
#include "core/surface/mesh.h"
#include "tests/surface/shared.h"

namespace runband {
namespace {

using namespace surface_tests;
namespace fs = std::filesystem;

class MeshFiles : public ::testing::Test {
 protected:
  void SetUp() override {
    folder = fs::temp_directory_path() / ("runband_meshes_" + std::to_string(::getpid()));
    mesh = rail_mesh(round_rail(), 0.0, 30.0, {.chord_error_mm = 0.2, .max_edge_mm = 10.0});
    mesh.scalar_name = "height above foot";
    for (const Vec3& v : mesh.vertices) mesh.scalar.push_back(v.z() + 172.0);
  }
  void TearDown() override {
    std::error_code ignored;
    fs::remove_all(folder, ignored);
  }
  std::string written(const std::string& name, const TriangleMesh& what) const {
    write_mesh(folder / name, what);
    return read_file(folder / name);
  }
  fs::path folder;
  TriangleMesh mesh;
};

// Reads values one after another; these tests run on little-endian machines.
struct Bytes {
  const std::string& all;
  std::size_t at = 0;
  template <typename Number>
  Number take() {
    Number value{};
    EXPECT_LE(at + sizeof value, all.size());
    std::memcpy(&value, all.data() + at, sizeof value);
    at += sizeof value;
    return value;
  }
};

TEST_F(MeshFiles, PlyHoldsVerticesScalarsAndTriangles) {
  const std::string file = written("rail.ply", mesh);
  const std::size_t end = file.find("end_header\n");
  ASSERT_NE(end, std::string::npos);
  std::istringstream header(file.substr(0, end));
  std::vector<std::string> properties;
  std::size_t vertices = 0, faces = 0;
  bool unit = false;
  for (std::string line; std::getline(header, line);) {
    std::istringstream words(line);
    std::string first, second, third;
    words >> first >> second >> third;
    if (first == "element" && second == "vertex") vertices = std::stoul(third);
    if (first == "element" && second == "face") faces = std::stoul(third);
    if (first == "property" && faces == 0) properties.push_back(second + " " + third);
    if (first == "format") {
      EXPECT_EQ(second, "binary_little_endian");
    }
    if (first == "comment") unit = unit || line.find("unit mm") != std::string::npos;
  }
  EXPECT_TRUE(unit);
  EXPECT_EQ(properties, (std::vector<std::string>{"double x", "double y", "double z", "double height_above_foot"}));
  ASSERT_EQ(vertices, mesh.vertices.size());
  ASSERT_EQ(faces, mesh.triangles.size());
  Bytes bytes{file, end + 11};
  for (std::size_t i = 0; i < vertices; ++i) {
    for (int k = 0; k < 3; ++k) EXPECT_EQ(bytes.take<double>(), mesh.vertices[i][k]);
    EXPECT_EQ(bytes.take<double>(), mesh.scalar[i]);
  }
  for (std::size_t i = 0; i < faces; ++i) {
    EXPECT_EQ(bytes.take<std::uint8_t>(), 3);
    for (const int v : mesh.triangles[i]) EXPECT_EQ(bytes.take<std::int32_t>(), v);
  }
  EXPECT_EQ(bytes.at, file.size());
}

TEST_F(MeshFiles, StlHoldsTheSameVolumeAndOutwardNormals) {
  const std::string file = written("rail.STL", mesh);
  ASSERT_EQ(file.size(), 84 + 50 * mesh.triangles.size());
  EXPECT_NE(file.substr(0, 5), "solid");
  EXPECT_NE(file.substr(0, 80).find("unit mm"), std::string::npos);
  Bytes bytes{file, 80};
  ASSERT_EQ(bytes.take<std::uint32_t>(), mesh.triangles.size());
  double six = 0.0;
  for (std::size_t i = 0; i < mesh.triangles.size(); ++i) {
    Vec3 v[4];
    for (Vec3& p : v)
      for (int k = 0; k < 3; ++k) p[k] = static_cast<double>(bytes.take<float>());
    EXPECT_EQ(bytes.take<std::uint16_t>(), 0);
    EXPECT_NEAR(v[0].norm(), 1.0, 1e-6);
    EXPECT_NEAR(v[0].dot((v[2] - v[1]).cross(v[3] - v[1]).normalized()), 1.0, 1e-4);
    six += v[1].dot(v[2].cross(v[3]));
  }
  EXPECT_NEAR(six / 6.0 / volume(mesh), 1.0, 1e-5);
}

std::string from_base64(const std::string& text) {
  std::string bytes;
  std::uint32_t group = 0;
  int bits = 0;
  for (const char c : text) {
    int value = -1;
    if (c >= 'A' && c <= 'Z') value = c - 'A';
    if (c >= 'a' && c <= 'z') value = c - 'a' + 26;
    if (c >= '0' && c <= '9') value = c - '0' + 52;
    if (c == '+') value = 62;
    if (c == '/') value = 63;
    if (value < 0) break;
    group = group << 6U | static_cast<std::uint32_t>(value);
    bits += 6;
    if (bits >= 8) {
      bits -= 8;
      bytes.push_back(static_cast<char>(group >> bits & 255U));
    }
  }
  return bytes;
}

// The examples of RFC 4648, section 10.
TEST(Base64, MatchesTheExamplesOfItsStandard) {
  EXPECT_EQ(base64(""), "");
  EXPECT_EQ(base64("f"), "Zg==");
  EXPECT_EQ(base64("fo"), "Zm8=");
  EXPECT_EQ(base64("foo"), "Zm9v");
  EXPECT_EQ(base64("foob"), "Zm9vYg==");
  EXPECT_EQ(base64("fooba"), "Zm9vYmE=");
  EXPECT_EQ(base64("foobar"), "Zm9vYmFy");
  EXPECT_EQ(base64(std::string("\xff\x00\xfe", 3)), "/wD+");
}

std::string vtp_array(const std::string& file, const std::string& name, const std::string& type) {
  const std::size_t named = file.find("Name=\"" + name + "\"");
  EXPECT_NE(named, std::string::npos) << name;
  const std::size_t open = file.rfind('<', named), close = file.find('>', named);
  const std::string tag = file.substr(open, close - open);
  EXPECT_NE(tag.find("type=\"" + type + "\""), std::string::npos) << tag;
  EXPECT_NE(tag.find("format=\"binary\""), std::string::npos) << tag;
  std::string bytes = from_base64(file.substr(close + 1, file.find('<', close) - close - 1));
  std::uint64_t length = 0;
  std::memcpy(&length, bytes.data(), 8);
  EXPECT_EQ(length + 8, bytes.size());
  return bytes.substr(8);
}

TEST_F(MeshFiles, VtpHoldsPointsPolygonsAndScalars) {
  const std::string file = written("rail.vtp", mesh);
  EXPECT_NE(file.find("header_type=\"UInt64\""), std::string::npos);
  EXPECT_NE(file.find("unit mm"), std::string::npos);
  EXPECT_NE(file.find("NumberOfPoints=\"" + std::to_string(mesh.vertices.size()) + "\""), std::string::npos);
  EXPECT_NE(file.find("NumberOfPolys=\"" + std::to_string(mesh.triangles.size()) + "\""), std::string::npos);
  const std::string points = vtp_array(file, "Points", "Float64");
  const std::string scalars = vtp_array(file, "height_above_foot", "Float64");
  const std::string corners = vtp_array(file, "connectivity", "Int32");
  const std::string offsets = vtp_array(file, "offsets", "Int32");
  ASSERT_EQ(points.size(), 24 * mesh.vertices.size());
  ASSERT_EQ(scalars.size(), 8 * mesh.vertices.size());
  Bytes p{points}, s{scalars}, c{corners}, o{offsets};
  for (std::size_t i = 0; i < mesh.vertices.size(); ++i) {
    for (int k = 0; k < 3; ++k) EXPECT_EQ(p.take<double>(), mesh.vertices[i][k]);
    EXPECT_EQ(s.take<double>(), mesh.scalar[i]);
  }
  for (std::size_t i = 0; i < mesh.triangles.size(); ++i) {
    for (const int v : mesh.triangles[i]) EXPECT_EQ(c.take<std::int32_t>(), v);
    EXPECT_EQ(o.take<std::int32_t>(), static_cast<std::int32_t>(3 * (i + 1)));
  }
}

struct Glb {
  nlohmann::json json;
  std::string binary;
  std::vector<float> floats(std::size_t accessor, int components) const {
    const auto& a = json["accessors"][accessor];
    EXPECT_EQ(a["componentType"], 5126);
    const auto& view = json["bufferViews"][a["bufferView"].get<std::size_t>()];
    EXPECT_EQ(view["byteLength"], a["count"].get<int>() * components * 4);
    std::vector<float> values(a["count"].get<std::size_t>() * static_cast<std::size_t>(components));
    std::memcpy(values.data(), binary.data() + view["byteOffset"].get<std::size_t>(), values.size() * 4);
    return values;
  }
};

Glb read_glb(const std::string& file) {
  Bytes bytes{file};
  EXPECT_EQ(bytes.take<std::uint32_t>(), 0x46546C67U);
  EXPECT_EQ(bytes.take<std::uint32_t>(), 2U);
  EXPECT_EQ(bytes.take<std::uint32_t>(), file.size());
  const auto json_length = bytes.take<std::uint32_t>();
  EXPECT_EQ(bytes.take<std::uint32_t>(), 0x4E4F534AU);
  EXPECT_EQ(json_length % 4, 0U);
  Glb glb;
  glb.json = nlohmann::json::parse(file.substr(bytes.at, json_length));
  bytes.at += json_length;
  const auto binary_length = bytes.take<std::uint32_t>();
  EXPECT_EQ(bytes.take<std::uint32_t>(), 0x004E4942U);
  glb.binary = file.substr(bytes.at);
  EXPECT_EQ(glb.binary.size(), binary_length);
  EXPECT_EQ(glb.json["buffers"][0]["byteLength"], binary_length);
  return glb;
}

TEST_F(MeshFiles, GlbIsInMetresWithNormalsAndColours) {
  const Glb glb = read_glb(written("rail.glb", mesh));
  EXPECT_EQ(glb.json["asset"]["version"], "2.0");
  EXPECT_EQ(glb.json["asset"]["extras"]["unit"], "m");
  const auto& primitive = glb.json["meshes"][0]["primitives"][0];
  const std::vector<float> position = glb.floats(primitive["attributes"]["POSITION"], 3);
  const std::vector<float> normal = glb.floats(primitive["attributes"]["NORMAL"], 3);
  const std::vector<float> colour = glb.floats(primitive["attributes"]["COLOR_0"], 3);
  ASSERT_EQ(position.size(), normal.size());
  ASSERT_EQ(position.size(), colour.size());
  const auto& accessor = glb.json["accessors"][primitive["indices"].get<std::size_t>()];
  ASSERT_EQ(accessor["componentType"], 5125);
  ASSERT_EQ(accessor["count"], 3 * mesh.triangles.size());
  const auto offset =
      glb.json["bufferViews"][accessor["bufferView"].get<std::size_t>()]["byteOffset"].get<std::size_t>();
  Bytes bytes{glb.binary, offset};
  const auto vector_at = [](const std::vector<float>& values, std::size_t i) {
    return Vec3(static_cast<double>(values[3 * i]), static_cast<double>(values[3 * i + 1]),
                static_cast<double>(values[3 * i + 2]));
  };
  double six = 0.0;
  for (std::size_t t = 0; t < mesh.triangles.size(); ++t) {
    std::size_t corner[3];
    for (std::size_t& i : corner) {
      i = bytes.take<std::uint32_t>();
      ASSERT_LT(i, position.size() / 3);
    }
    const Vec3 a = vector_at(position, corner[0]), b = vector_at(position, corner[1]),
               c = vector_at(position, corner[2]);
    six += a.dot(b.cross(c));
    const Vec3 face = (b - a).cross(c - a).normalized();
    for (const std::size_t i : corner) {
      EXPECT_NEAR(vector_at(normal, i).norm(), 1.0, 1e-6);
      EXPECT_GT(vector_at(normal, i).dot(face), 0.86);  // never blurred over an edge sharper than 30 degrees
    }
    // z up has become y up.
    const Vec3& original = mesh.vertices[static_cast<std::size_t>(mesh.triangles[t][0])];
    EXPECT_NEAR((a - 1e-3 * Vec3(original.x(), original.z(), -original.y())).norm(), 0.0, 1e-7);
  }
  EXPECT_NEAR(six / 6.0 / (1e-9 * volume(mesh)), 1.0, 1e-5);
  const auto& bounds = glb.json["accessors"][primitive["attributes"]["POSITION"].get<std::size_t>()];
  EXPECT_NEAR(bounds["max"][1].get<double>(), 0.0, 1e-7);
  double foot = 0.0;
  for (const Vec3& v : mesh.vertices) foot = std::min(foot, v.z());
  EXPECT_NEAR(bounds["min"][1].get<double>(), 1e-3 * foot, 1e-7);
  EXPECT_NEAR(bounds["max"][0].get<double>(), 0.030, 1e-7);
  // Higher is lighter: luminance (linear RGB, Rec. 709) rises with the scalar.
  std::vector<std::pair<float, float>> height_and_light;
  for (std::size_t i = 0; i < position.size() / 3; ++i) {
    for (std::size_t k = 0; k < 3; ++k) {
      EXPECT_GE(colour[3 * i + k], 0.0F);
      EXPECT_LE(colour[3 * i + k], 1.0F);
    }
    height_and_light.emplace_back(position[3 * i + 1],
                                  0.2126F * colour[3 * i] + 0.7152F * colour[3 * i + 1] + 0.0722F * colour[3 * i + 2]);
  }
  std::sort(height_and_light.begin(), height_and_light.end());
  for (std::size_t i = 1; i < height_and_light.size(); ++i)
    EXPECT_GE(height_and_light[i].second, height_and_light[i - 1].second - 1e-5F);
}

TEST_F(MeshFiles, GlbWithoutScalarHasNoColours) {
  mesh.scalar.clear();
  const Glb glb = read_glb(written("rail.glb", mesh));
  const auto& attributes = glb.json["meshes"][0]["primitives"][0]["attributes"];
  EXPECT_TRUE(attributes.contains("NORMAL"));
  EXPECT_FALSE(attributes.contains("COLOR_0"));
}

TEST_F(MeshFiles, WhatCannotBeWrittenIsRefusedAndLeavesNothing) {
  try {
    write_mesh(folder / "rail.obj", mesh);
    ADD_FAILURE();
  } catch (const InputError& error) {
    EXPECT_EQ(error.code(), ErrorCode::bad_option);
    EXPECT_NE(error.message().find("\".obj\""), std::string::npos);
    EXPECT_EQ(error.cure(), "use .ply, .stl, .vtp or .glb.");
  }
  mesh.scalar.pop_back();
  EXPECT_THROW(write_mesh(folder / "rail.ply", mesh), InputError);
  EXPECT_FALSE(fs::exists(folder));
  mesh.scalar.clear();
  EXPECT_THROW(write_mesh("/proc/rail.ply", mesh), FileError);
}

}  // namespace
}  // namespace runband
