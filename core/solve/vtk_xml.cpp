#include "core/solve/vtk_xml.h"

#include <cstdint>
#include <cstring>
#include <ostream>

#include "core/base/file.h"
#include "core/base/text.h"
#include "core/case/carried.h"

namespace runband {

namespace {

/// Doubles as inline base64 with the byte count in front, header_type UInt64.
std::string encoded(const std::vector<double>& values) {
  const std::uint64_t bytes = values.size() * sizeof(double);
  std::string raw(sizeof bytes + bytes, '\0');
  std::memcpy(raw.data(), &bytes, sizeof bytes);
  if (bytes > 0) std::memcpy(raw.data() + sizeof bytes, values.data(), bytes);
  const std::string padded = base64_encode(raw);
  return padded + std::string((4 - padded.size() % 4) % 4, '=');
}

void data_array(std::ostream& out, const std::string& name, int components, const std::vector<double>& values) {
  out << "<DataArray type=\"Float64\" Name=\"" << name << "\" NumberOfComponents=\"" << components
      << "\" format=\"binary\">" << encoded(values) << "</DataArray>\n";
}

std::string array_name(const std::string& name, const std::string& unit) {
  return unit.empty() || unit == "1" ? name : name + " [" + unit + "]";
}

constexpr const char* kHead = "<?xml version=\"1.0\"?>\n<VTKFile type=\"";
constexpr const char* kBytes = "\" version=\"1.0\" byte_order=\"LittleEndian\" header_type=\"UInt64\">\n";

}  // namespace

void write_patch_vti(const std::filesystem::path& path, const Grid& grid, const std::vector<Field>& fields) {
  write_file(path, [&](std::ostream& out) {
    const std::string extent = "0 " + std::to_string(grid.nx) + " 0 " + std::to_string(grid.ns) + " 0 0";
    out << kHead << "ImageData" << kBytes
        << "<!-- contact frame: x rolling, y across towards the field side; mm -->\n<ImageData WholeExtent=\"" << extent
        << "\" Origin=\"" << number_text(grid.x0_mm - grid.dx_mm / 2) << ' ' << number_text(grid.s0_mm - grid.ds_mm / 2)
        << " 0\" Spacing=\"" << number_text(grid.dx_mm) << ' ' << number_text(grid.ds_mm) << " 1\">\n<Piece Extent=\""
        << extent << "\">\n<CellData>\n";
    for (const Field& field : fields)
      data_array(out, array_name(field.name, field.unit), field.components, field.values);
    out << "</CellData>\n</Piece>\n</ImageData>\n</VTKFile>\n";
  });
}

void write_volume_vtr(const std::filesystem::path& path, const Volume& volume) {
  write_file(path, [&](std::ostream& out) {
    const Grid& g = volume.grid;
    const std::string extent = "0 " + std::to_string(g.nx - 1) + " 0 " + std::to_string(g.ns - 1) + " 0 " +
                               std::to_string(static_cast<int>(volume.depth_mm.size()) - 1);
    std::vector<double> x, s, z;
    for (int i = 0; i < g.nx; ++i) x.push_back(g.x(i));
    for (int j = 0; j < g.ns; ++j) s.push_back(g.s(j));
    for (const double depth : volume.depth_mm) z.push_back(-depth);
    out << kHead << "RectilinearGrid" << kBytes << "<RectilinearGrid WholeExtent=\"" << extent
        << "\">\n<Piece Extent=\"" << extent << "\">\n<PointData>\n";
    data_array(out, array_name(volume.name, volume.unit), 1, volume.values);
    out << "</PointData>\n<Coordinates>\n";
    data_array(out, "x_mm", 1, x);
    data_array(out, "s_mm", 1, s);
    data_array(out, "z_mm", 1, z);
    out << "</Coordinates>\n</Piece>\n</RectilinearGrid>\n</VTKFile>\n";
  });
}

}  // namespace runband
