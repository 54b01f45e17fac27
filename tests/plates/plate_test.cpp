// The figures of a solution: right format, true size, right colours, real words, the same bytes every time.
#include "viewer/plates/plate.h"

#include <gtest/gtest.h>
#include <png.h>

#include <Eigen/Geometry>
#include <cmath>
#include <cstring>
#include <filesystem>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/case/carried.h"
#include "viewer/plates/sheet.h"
#include "viewer/scene/scene_meshes.h"
#include "viewer/scene/scene_picture.h"

namespace runband {
namespace {

namespace fs = std::filesystem;

Case demo(const std::string& name, const std::vector<std::string>& settings = {}) {
  return load_case(std::string(RUNBAND_DATA) + "/demo/" + name, settings);
}
const Solution& curve12() {
  static const Solution solution = solve(demo("curve12.toml"));
  return solution;
}
fs::path out(const std::string& name) {
  const fs::path folder = fs::path(testing::TempDir()) / "runband_plates";
  fs::create_directories(folder);
  return folder / name;
}
Plate plate_of(const std::string& kind) {
  Plate plate;
  plate.kind = kind;
  plate.dpi = 100;
  return plate;
}

struct Pixels {
  unsigned width = 0, height = 0;
  std::vector<std::uint8_t> rgba;
  const std::uint8_t* at(unsigned x, unsigned y) const { return &rgba[(std::size_t{y} * width + x) * 4]; }
};
/// By libpng's simplified reader.
Pixels decoded(const fs::path& file) {
  png_image image{};
  image.version = PNG_IMAGE_VERSION;
  EXPECT_NE(png_image_begin_read_from_file(&image, file.c_str()), 0) << image.message;
  image.format = PNG_FORMAT_RGBA;
  Pixels pixels{image.width, image.height, std::vector<std::uint8_t>(PNG_IMAGE_SIZE(image))};
  EXPECT_NE(png_image_finish_read(&image, nullptr, pixels.rgba.data(), 0, nullptr), 0);
  return pixels;
}

TEST(Plates, APngHasItsTrueSizeAndGivesItsCaseBack) {
  Plate plate = plate_of("patch");
  plate.width_mm = 127;
  plate.height_mm = 101.6;
  plate.dpi = 200;
  draw_plate(plate, curve12(), out("patch.png"));
  const Pixels pixels = decoded(out("patch.png"));
  EXPECT_EQ(pixels.width, 1000U);
  EXPECT_EQ(pixels.height, 800U);
  const std::string bytes = read_file(out("patch.png"));
  const auto phys = bytes.find("pHYs");
  ASSERT_NE(phys, std::string::npos);
  const unsigned per_metre =
      static_cast<unsigned char>(bytes[phys + 6]) * 256U + static_cast<unsigned char>(bytes[phys + 7]);
  EXPECT_EQ(per_metre, 7874U);  // 200 dpi
  EXPECT_EQ(carried_case(bytes, "patch.png"), write_case(curve12().asked));
  EXPECT_EQ(load_case(out("patch.png")).title, curve12().asked.title);
}

TEST(Plates, TheSameInputGivesTheSameBytes) {
  for (const char* kind : {"patch", "section", "scene"}) {
    const std::string first = out(std::string(kind) + "_1.png"), second = out(std::string(kind) + "_2.png");
    draw_plate(plate_of(kind), curve12(), first);
    draw_plate(plate_of(kind), curve12(), second);
    EXPECT_EQ(read_file(first), read_file(second)) << kind;
  }
  for (const char* ending : {".svg", ".pdf"}) {
    draw_plate(plate_of("patch"), curve12(), out(std::string("a") + ending));
    draw_plate(plate_of("patch"), curve12(), out(std::string("b") + ending));
    EXPECT_EQ(read_file(out(std::string("a") + ending)), read_file(out(std::string("b") + ending))) << ending;
  }
}

TEST(Plates, AnSvgHoldsRealWordsAndItsFont) {
  draw_plate(plate_of("patch"), curve12(), out("words.svg"));
  const std::string svg = read_file(out("words.svg"));
  for (const char* word :
       {"Skerry Line, curve 12", "contact pressure, MPa", "rolls this way", "mm²", "µm", "10\u2009mm", "font-face"})
    EXPECT_NE(svg.find(word), std::string::npos) << word;
  EXPECT_EQ(carried_case(svg, "words.svg"), write_case(curve12().asked));
}

TEST(Plates, APdfEmbedsItsFonts) {
  draw_plate(plate_of("section"), curve12(), out("section.pdf"));
  const std::string pdf = read_file(out("section.pdf"));
  EXPECT_TRUE(pdf.starts_with("%PDF-"));
  EXPECT_NE(pdf.find("/FontFile"), std::string::npos);
  EXPECT_EQ(carried_case(pdf, "section.pdf"), write_case(curve12().asked));
}

TEST(Plates, ThePeakOfTheHardestPatchHasTheDarkestEmber) {
  draw_plate(plate_of("patch"), curve12(), out("ember.png"));
  const Pixels pixels = decoded(out("ember.png"));
  const plot::Colour peak = plot::colour_at(plot::ColourMap::ember, 1.0);
  int found = 0;
  for (unsigned y = 0; y < pixels.height; ++y) {
    for (unsigned x = 0; x < pixels.width; ++x) {
      const std::uint8_t* p = pixels.at(x, y);
      found += std::abs(p[0] - plot::byte_of(peak.r)) <= 6 && std::abs(p[1] - plot::byte_of(peak.g)) <= 6 &&
               std::abs(p[2] - plot::byte_of(peak.b)) <= 6;
    }
  }
  EXPECT_GT(found, 20);
}

TEST(Plates, TheHeatMapCarriesTheForce) {
  for (const Contact& contact : curve12().contacts) {
    if (!contact.patch) continue;
    const plot::HeatMap map = pressure_map(*contact.patch, contact.patch->peak_pressure_MPa);
    double sum = 0;
    for (const double p : map.values) sum += p * map.dx * map.dy;
    EXPECT_NEAR(sum, contact.zone.normal_force_N, 1e-6 * contact.zone.normal_force_N);
  }
}

TEST(Plates, TheTraverseIsDrawnWithItsTitles) {
  const Traverse t = traverse(demo("new_1_40.toml"), -6, 6, 0.25);
  draw_plate(plate_of("traverse"), t, out("traverse.svg"));
  const std::string svg = read_file(out("traverse.svg"));
  for (const char* word : {"Rolling radius difference, mm", "left minus right", "Contact angle, °",
                           "lateral displacement of the wheelset, mm", "left", "right"})
    EXPECT_NE(svg.find(word), std::string::npos) << word;
}

TEST(Plates, RefusalsAreSentencesAndLeaveNothing) {
  EXPECT_THROW(parse_size("180x120"), InputError);
  EXPECT_THROW(parse_size("1x1mm"), InputError);
  EXPECT_THROW(parse_size("axbmm"), InputError);
  EXPECT_EQ(parse_size("180x120mm"), std::pair(180.0, 120.0));
  EXPECT_THROW(draw_plate(plate_of("patch"), curve12(), out("x.bmp")), InputError);
  EXPECT_THROW(draw_plate(plate_of("scene"), curve12(), out("x.svg")), InputError);
  Plate wrong = plate_of("patch");
  wrong.contact = "middle";
  EXPECT_THROW(draw_plate(wrong, curve12(), out("x.png")), InputError);
  EXPECT_THROW(draw_plate(plate_of("scene"), solve(demo("bench.toml")), out("x.png")), InputError);
  EXPECT_THROW(draw_plate(plate_of("section"), solve(demo("bench.toml")), out("x.png")), InputError);
  for (const char* name : {"x.bmp", "x.svg", "x.png"}) EXPECT_FALSE(fs::exists(out(name))) << name;
}

/// Distance of a point from a mesh's triangles, those near it.
double distance_to(const TriangleMesh& mesh, const Vec3& p) {
  double least = 1e9;
  for (const auto& t : mesh.triangles) {
    const Vec3 &a = mesh.vertices[static_cast<std::size_t>(t[0])], &b = mesh.vertices[static_cast<std::size_t>(t[1])],
               &c = mesh.vertices[static_cast<std::size_t>(t[2])];
    const Vec3 ab = b - a, ac = c - a, n = ab.cross(ac);
    if (n.squaredNorm() == 0) continue;
    // Barycentric place of the foot of the perpendicular; only feet inside the triangle count, and just beside it: a
    // point outside a convex edge has its foot in neither neighbour.
    constexpr double kBeside = 0.02;
    const Vec3 ap = p - a;
    const double u = n.dot(ab.cross(ap)) / n.squaredNorm(), v = n.dot(ap.cross(ac)) / n.squaredNorm();
    if (u < -kBeside || v < -kBeside || u + v > 1 + kBeside) continue;
    least = std::min(least, std::abs(n.normalized().dot(ap)));
  }
  return least;
}

TEST(Scene, WheelAndRailMeetAtTheContact) {
  const MeshOptions fine{.chord_error_mm = 0.01};
  int checked = 0;
  for (const char* name : {"curve12.toml", "new_1_40.toml", "flange_contact.toml"}) {
    for (const char* reference : {"axle", "rail"}) {
      const Solution solution = solve(demo(name, {std::string("state.lateral_reference=") + reference}));
      for (const Contact& contact : solution.contacts) {
        if (!contact.zone.carries_load || contact.zone.gap_mm > 1e-6) continue;
        const Vec3& p = contact.zone.track_mm;
        EXPECT_LT(distance_to(placed_wheel(solution, contact.zone.side, fine), p), 0.02)
            << name << " " << contact.zone.zone;
        EXPECT_LT(distance_to(placed_rail(solution, contact.zone.side, fine), p), 0.02)
            << name << " " << contact.zone.zone;
        ++checked;
      }
    }
  }
  EXPECT_GE(checked, 12);
}

TEST(Scene, PatchesFaceUpOnBothSides) {
  for (const Contact& contact : curve12().contacts) {
    if (!contact.patch) continue;
    const TriangleMesh sheet = patch_sheet(contact, 0.1);
    for (const auto& t : sheet.triangles) {
      const Vec3& a = sheet.vertices[static_cast<std::size_t>(t[0])];
      const Vec3 n = (sheet.vertices[static_cast<std::size_t>(t[1])] - a)
                         .cross(sheet.vertices[static_cast<std::size_t>(t[2])] - a);
      ASSERT_GT(n.z(), 0) << contact.zone.zone;
    }
  }
}

TEST(Scene, ShowsThePatchWhereItSaysAndCanBeTransparent) {
  SceneOptions options{400, 260, 4, plot::ThemeName::paper, true, 0};
  const auto& contacts = curve12().contacts;
  while (!contacts[options.contact].patch) ++options.contact;
  const ScenePicture picture = draw_scene(curve12(), options);
  ASSERT_EQ(picture.image.width, 400);
  ASSERT_GT(picture.contact_px.x, 0);
  ASSERT_LT(picture.contact_px.x, 400);
  int warm = 0, clear = 0, solid = 0;
  for (int y = 0; y < 260; ++y) {
    for (int x = 0; x < 400; ++x) {
      const std::uint8_t* p = &picture.image.rgba[static_cast<std::size_t>((y * 400 + x) * 4)];
      clear += p[3] == 0;
      solid += p[3] == 255;
      if (std::hypot(x - picture.contact_px.x, y - picture.contact_px.y) < 14 * picture.px_per_mm)
        warm += p[0] > p[2] + 40;
    }
  }
  EXPECT_GT(warm, 3);      // ember colours near the contact
  EXPECT_GT(clear, 2000);  // sky
  EXPECT_GT(solid, 2000);  // rail
}

TEST(Scene, WritesAGlb) {
  write_scene_glb(curve12(), out("scene.glb"));
  const std::string glb = read_file(out("scene.glb"));
  EXPECT_TRUE(glb.starts_with("glTF"));
  std::uint32_t length = 0;
  std::memcpy(&length, glb.data() + 8, 4);
  EXPECT_EQ(length, glb.size());
}

}  // namespace
}  // namespace runband
