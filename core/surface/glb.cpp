#include "core/surface/glb.h"

#include <Eigen/Geometry>
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <limits>
#include <nlohmann/json.hpp>
#include <vector>

#include "core/surface/bytes.h"

namespace runband {

namespace {

constexpr double kCosCrease = 0.8660254037844387;  // 30 degrees

// Constants of the format.
constexpr std::uint32_t kMagic = 0x46546C67;  // "glTF"
constexpr std::uint32_t kJsonChunk = 0x4E4F534A;
constexpr std::uint32_t kBinaryChunk = 0x004E4942;
constexpr int kFloat = 5126, kUnsignedInt = 5125, kArrayBuffer = 34962, kElementBuffer = 34963;

// Vertices split where the surface has an edge, so that each has one normal.
struct SplitMesh {
  std::vector<int> source;  // vertex of the mesh
  std::vector<Vec3> normals;
  std::vector<std::uint32_t> indices;
};

SplitMesh split_at_edges(const TriangleMesh& mesh) {
  struct Use {
    std::uint32_t vertex;  // in the split mesh
    Vec3 direction;        // of the face that made it
  };
  SplitMesh split;
  split.indices.reserve(3 * mesh.triangles.size());
  std::vector<std::vector<Use>> uses(mesh.vertices.size());
  for (const auto& triangle : mesh.triangles) {
    std::array<Vec3, 3> corner;
    for (std::size_t i = 0; i < 3; ++i) corner[i] = mesh.vertices[static_cast<std::size_t>(triangle[i])];
    const Vec3 face = (corner[1] - corner[0]).cross(corner[2] - corner[0]).normalized();
    for (std::size_t i = 0; i < 3; ++i) {
      const Vec3 u = (corner[(i + 1) % 3] - corner[i]).normalized();
      const Vec3 v = (corner[(i + 2) % 3] - corner[i]).normalized();
      const double angle = std::acos(std::clamp(u.dot(v), -1.0, 1.0));
      auto& known = uses[static_cast<std::size_t>(triangle[i])];
      auto use =
          std::find_if(known.begin(), known.end(), [&](const Use& k) { return k.direction.dot(face) > kCosCrease; });
      if (use == known.end()) {
        known.push_back({static_cast<std::uint32_t>(split.source.size()), face});
        split.source.push_back(triangle[i]);
        split.normals.emplace_back(Vec3::Zero());
        use = known.end() - 1;
      }
      split.normals[use->vertex] += angle * face;
      split.indices.push_back(use->vertex);
    }
  }
  for (Vec3& normal : split.normals) {
    const double length = normal.norm();
    normal = length > 0.0 ? Vec3(normal / length) : Vec3::UnitZ();
  }
  return split;
}

// Linear RGB for a share 0..1: lightness rises evenly from dark blue to pale yellow, through OKLab (B. Ottosson 2020),
// so that equal steps look equal, also to colour-blind readers and in grey.
std::array<float, 3> ramp_colour(double share) {
  share = std::isfinite(share) ? std::clamp(share, 0.0, 1.0) : 0.0;
  const double lightness = 0.28 + 0.66 * share;
  const double a = -0.015 - 0.035 * std::sin(3.14159265358979 * share);
  const double b = -0.115 + 0.235 * share;
  const auto cube = [](double x) { return x * x * x; };
  const double l = cube(lightness + 0.3963377774 * a + 0.2158037573 * b);
  const double m = cube(lightness - 0.1055613458 * a - 0.0638541728 * b);
  const double s = cube(lightness - 0.0894841775 * a - 1.2914855480 * b);
  const auto channel = [](double x) { return static_cast<float>(std::clamp(x, 0.0, 1.0)); };
  return {channel(4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s),
          channel(-1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s),
          channel(-0.0041960863 * l - 0.7034186147 * m + 1.7076147010 * s)};
}

void pad(std::string& bytes, char filler) {
  while (bytes.size() % 4 != 0) bytes.push_back(filler);
}

}  // namespace

std::string glb_bytes(const TriangleMesh& mesh) {
  using Json = nlohmann::ordered_json;
  constexpr double kMetres = 1e-3;
  const SplitMesh split = split_at_edges(mesh);
  const std::size_t count = split.source.size();
  std::string binary;
  binary.reserve(count * 36 + split.indices.size() * 4);
  Json views = Json::array(), accessors = Json::array();
  // Everything appended to `binary` since the last call becomes a view with one accessor; returns its number.
  auto add = [&, begun = std::size_t{0}](int target, int component, const char* type, std::size_t items) mutable {
    views.push_back({{"buffer", 0}, {"byteOffset", begun}, {"byteLength", binary.size() - begun}, {"target", target}});
    accessors.push_back(
        {{"bufferView", views.size() - 1}, {"componentType", component}, {"count", items}, {"type", type}});
    begun = binary.size();
    return accessors.size() - 1;
  };
  // z up becomes y up: (x, y, z) -> (x, z, -y), a turn about x.
  const auto put_turned = [&](const Vec3& v, double factor) {
    const std::array<float, 3> turned{static_cast<float>(factor * v.x()), static_cast<float>(factor * v.z()),
                                      static_cast<float>(-factor * v.y())};
    for (const float value : turned) put(binary, value);
    return turned;
  };

  Json attributes;
  std::array<float, 3> low, high;
  low.fill(std::numeric_limits<float>::max());
  high.fill(std::numeric_limits<float>::lowest());
  for (const int v : split.source) {
    const auto turned = put_turned(mesh.vertices[static_cast<std::size_t>(v)], kMetres);
    for (std::size_t i = 0; i < 3; ++i) {
      low[i] = std::min(low[i], turned[i]);
      high[i] = std::max(high[i], turned[i]);
    }
  }
  attributes["POSITION"] = add(kArrayBuffer, kFloat, "VEC3", count);
  accessors.back()["min"] = low;
  accessors.back()["max"] = high;
  for (const Vec3& normal : split.normals) put_turned(normal, 1.0);
  attributes["NORMAL"] = add(kArrayBuffer, kFloat, "VEC3", count);
  if (!mesh.scalar.empty()) {
    const auto [least, most] = std::minmax_element(mesh.scalar.begin(), mesh.scalar.end());
    const double range = *most > *least ? *most - *least : 1.0;
    for (const int v : split.source)
      for (const float channel : ramp_colour((mesh.scalar[static_cast<std::size_t>(v)] - *least) / range))
        put(binary, channel);
    attributes["COLOR_0"] = add(kArrayBuffer, kFloat, "VEC3", count);
  }
  for (const std::uint32_t index : split.indices) put(binary, index);
  const std::size_t indices = add(kElementBuffer, kUnsignedInt, "SCALAR", split.indices.size());
  pad(binary, '\0');

  Json material = {{"pbrMetallicRoughness", {{"metallicFactor", 0.0}, {"roughnessFactor", 0.6}}}};
  if (mesh.scalar.empty()) material["pbrMetallicRoughness"]["baseColorFactor"] = {0.42, 0.43, 0.45, 1.0};
  Json extras = {{"unit", "m"}};
  if (!mesh.scalar.empty()) extras["vertex_colour"] = mesh.scalar_name;
  const Json primitive = {{"attributes", attributes}, {"indices", indices}, {"material", 0}};
  Json document;
  document["asset"] = {{"version", "2.0"}, {"generator", "Runband"}, {"extras", extras}};
  document["scene"] = 0;
  document["scenes"][0]["nodes"][0] = 0;
  document["nodes"][0]["mesh"] = 0;
  document["meshes"][0]["primitives"][0] = primitive;
  document["materials"][0] = material;
  document["buffers"][0]["byteLength"] = binary.size();
  document["bufferViews"] = views;
  document["accessors"] = accessors;
  std::string json = document.dump(-1, ' ', false, Json::error_handler_t::replace);
  pad(json, ' ');

  std::string file;
  file.reserve(28 + json.size() + binary.size());
  put(file, kMagic);
  put(file, std::uint32_t{2});
  put(file, static_cast<std::uint32_t>(28 + json.size() + binary.size()));
  put(file, static_cast<std::uint32_t>(json.size()));
  put(file, kJsonChunk);
  file += json;
  put(file, static_cast<std::uint32_t>(binary.size()));
  put(file, kBinaryChunk);
  return file + binary;
}

}  // namespace runband
