// Meshes to files: PLY, STL and VTK XML here, GLB in glb.cpp.
#include <Eigen/Geometry>
#include <algorithm>
#include <cctype>
#include <cmath>
#include <cstdint>
#include <string>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/surface/bytes.h"
#include "core/surface/glb.h"
#include "core/surface/mesh.h"

namespace runband {

std::string base64(const std::string& bytes) {
  static constexpr char kAlphabet[] = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
  std::string text;
  text.reserve((bytes.size() + 2) / 3 * 4);
  const auto byte = [&](std::size_t i) {
    return i < bytes.size() ? static_cast<std::uint32_t>(static_cast<unsigned char>(bytes[i])) : 0U;
  };
  for (std::size_t i = 0; i < bytes.size(); i += 3) {
    const std::uint32_t group = byte(i) << 16U | byte(i + 1) << 8U | byte(i + 2);
    text += kAlphabet[group >> 18U & 63U];
    text += kAlphabet[group >> 12U & 63U];
    text += i + 1 < bytes.size() ? kAlphabet[group >> 6U & 63U] : '=';
    text += i + 2 < bytes.size() ? kAlphabet[group & 63U] : '=';
  }
  return text;
}

namespace {

// A name that PLY headers and XML attributes take as it is.
std::string plain_name(const std::string& name) {
  std::string plain = name.empty() ? "scalar" : name;
  for (char& c : plain)
    if (std::isalnum(static_cast<unsigned char>(c)) == 0) c = '_';
  return plain;
}

std::string ply_bytes(const TriangleMesh& mesh) {
  std::string bytes = "ply\nformat binary_little_endian 1.0\ncomment made by Runband, unit mm\nelement vertex " +
                      std::to_string(mesh.vertices.size()) +
                      "\nproperty double x\nproperty double y\nproperty double z\n";
  if (!mesh.scalar.empty()) bytes += "property double " + plain_name(mesh.scalar_name) + "\n";
  bytes += "element face " + std::to_string(mesh.triangles.size()) +
           "\nproperty list uchar int vertex_indices\nend_header\n";
  bytes.reserve(bytes.size() + 32 * mesh.vertices.size() + 13 * mesh.triangles.size());
  for (std::size_t i = 0; i < mesh.vertices.size(); ++i) {
    for (const double coordinate : mesh.vertices[i]) put(bytes, coordinate);
    if (!mesh.scalar.empty()) put(bytes, mesh.scalar[i]);
  }
  for (const auto& triangle : mesh.triangles) {
    put(bytes, std::uint8_t{3});
    for (const int v : triangle) put(bytes, static_cast<std::int32_t>(v));
  }
  return bytes;
}

std::string stl_bytes(const TriangleMesh& mesh) {
  std::string bytes = "made by Runband, unit mm";  // must not begin with "solid"
  bytes.resize(80, ' ');
  put(bytes, static_cast<std::uint32_t>(mesh.triangles.size()));
  bytes.reserve(bytes.size() + 50 * mesh.triangles.size());
  for (const auto& [a, b, c] : mesh.triangles) {
    const Vec3& p = mesh.vertices[static_cast<std::size_t>(a)];
    const Vec3& q = mesh.vertices[static_cast<std::size_t>(b)];
    const Vec3& r = mesh.vertices[static_cast<std::size_t>(c)];
    const Vec3 normal = (q - p).cross(r - p).normalized();
    for (const Vec3* v : {&normal, &p, &q, &r})
      for (const double coordinate : *v) put(bytes, static_cast<float>(coordinate));
    put(bytes, std::uint16_t{0});
  }
  return bytes;
}

// An inline array of VTK XML: the number of bytes and the bytes, in one base64 stream.
template <typename Fill>
std::string vtk_array(const std::string& attributes, std::size_t byte_count, const Fill& fill) {
  std::string bytes;
  bytes.reserve(byte_count + 8);
  put(bytes, static_cast<std::uint64_t>(byte_count));
  fill(bytes);
  return "        <DataArray " + attributes + " format=\"binary\">" + base64(bytes) + "</DataArray>\n";
}

std::string vtp_bytes(const TriangleMesh& mesh) {
  const std::size_t points = mesh.vertices.size();
  const std::size_t triangles = mesh.triangles.size();
  std::string text =
      "<?xml version=\"1.0\"?>\n<!-- made by Runband, unit mm -->\n"
      "<VTKFile type=\"PolyData\" version=\"1.0\" byte_order=\"LittleEndian\" header_type=\"UInt64\">\n"
      "  <PolyData>\n    <Piece NumberOfPoints=\"" +
      std::to_string(points) + "\" NumberOfVerts=\"0\" NumberOfLines=\"0\" NumberOfStrips=\"0\" NumberOfPolys=\"" +
      std::to_string(triangles) + "\">\n";
  if (!mesh.scalar.empty()) {
    const std::string name = plain_name(mesh.scalar_name);
    text += "      <PointData Scalars=\"" + name + "\">\n" +
            vtk_array("type=\"Float64\" Name=\"" + name + "\"", 8 * points,
                      [&](std::string& bytes) {
                        for (const double value : mesh.scalar) put(bytes, value);
                      }) +
            "      </PointData>\n";
  }
  text += "      <Points>\n" +
          vtk_array("type=\"Float64\" Name=\"Points\" NumberOfComponents=\"3\"", 24 * points,
                    [&](std::string& bytes) {
                      for (const Vec3& v : mesh.vertices)
                        for (const double coordinate : v) put(bytes, coordinate);
                    }) +
          "      </Points>\n      <Polys>\n" +
          vtk_array("type=\"Int32\" Name=\"connectivity\"", 12 * triangles,
                    [&](std::string& bytes) {
                      for (const auto& triangle : mesh.triangles)
                        for (const int v : triangle) put(bytes, static_cast<std::int32_t>(v));
                    }) +
          vtk_array("type=\"Int32\" Name=\"offsets\"", 4 * triangles,
                    [&](std::string& bytes) {
                      for (std::size_t i = 1; i <= triangles; ++i) put(bytes, static_cast<std::int32_t>(3 * i));
                    }) +
          "      </Polys>\n    </Piece>\n  </PolyData>\n</VTKFile>\n";
  return text;
}

}  // namespace

void write_mesh(const std::filesystem::path& path, const TriangleMesh& mesh) {
  if (!mesh.scalar.empty() && mesh.scalar.size() != mesh.vertices.size()) {
    throw InputError(ErrorCode::out_of_range,
                     path.string() + ": " + std::to_string(mesh.scalar.size()) + " scalars for " +
                         std::to_string(mesh.vertices.size()) + " vertices.",
                     "give one scalar for each vertex, or none.");
  }
  std::string ending = path.extension().string();
  std::transform(ending.begin(), ending.end(), ending.begin(),
                 [](char c) { return static_cast<char>(std::tolower(static_cast<unsigned char>(c))); });
  if (ending == ".ply") return write_file(path, ply_bytes(mesh));
  if (ending == ".stl") return write_file(path, stl_bytes(mesh));
  if (ending == ".vtp") return write_file(path, vtp_bytes(mesh));
  if (ending == ".glb") return write_file(path, glb_bytes(mesh));
  throw InputError(ErrorCode::bad_option,
                   path.string() + ": meshes are not written with the ending \"" + ending + "\".",
                   "use .ply, .stl, .vtp or .glb.");
}

}  // namespace runband
