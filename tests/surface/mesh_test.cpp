// Surfaces of rail and wheel: closed, oriented, as near to the true surface as they say, and of the trade's
// proportions.
#include "core/surface/mesh.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <random>
#include <string>

#include "core/base/error.h"
#include "tests/surface/shared.h"

namespace runband {
namespace {

using namespace surface_tests;
constexpr double kPi = std::numbers::pi;

// The sampler looks at seven points inside a chord; between them a fillet may reach a little further.
constexpr double kSamplerMargin = 1.03;

void expect_sound(const TriangleMesh& mesh, const std::string& name) {
  const MeshReport report = check_mesh(mesh);
  EXPECT_TRUE(report.closed) << name;
  EXPECT_TRUE(report.manifold) << name;
  EXPECT_TRUE(report.oriented_outward) << name;
  EXPECT_FALSE(report.self_intersecting) << name;
  EXPECT_NEAR(report.volume_mm3 / volume(mesh), 1.0, 1e-9) << name;
}

Vec3 lowest(const TriangleMesh& mesh) {
  Vec3 low = mesh.vertices.front();
  for (const Vec3& v : mesh.vertices) low = low.cwiseMin(v);
  return low;
}
Vec3 highest(const TriangleMesh& mesh) {
  Vec3 high = mesh.vertices.front();
  for (const Vec3& v : mesh.vertices) high = high.cwiseMax(v);
  return high;
}

TEST(RailMesh, IsClosedOrientedAndFreeOfCrossingsForEveryStandardRail) {
  for (const char* name : {"standard:60E1", "standard:54E1", "standard:49E1"}) {
    const auto rail = load_profile(name, ProfileKind::rail);
    for (const double chord_error : {0.2, 0.01})
      expect_sound(rail_mesh(*rail, -40.0, 60.0, {.chord_error_mm = chord_error}), name);
    expect_sound(rail_mesh(*rail, 0.0, 100.0, {.chord_error_mm = 0.1, .max_edge_mm = 7.0}), name);
  }
  expect_sound(rail_mesh(round_rail(), 0.0, 1.0), "round");
}

TEST(WheelMesh, IsClosedOrientedAndFreeOfCrossingsForEveryStandardWheel) {
  for (const char* name : {"standard:S1002", "standard:coned_1_20", "standard:coned_1_40"}) {
    const auto wheel = load_profile(name, ProfileKind::wheel);
    for (const double radius : {250.0, 460.0, 625.0})
      expect_sound(wheel_mesh(*wheel, radius, {.chord_error_mm = 0.3}), name);
  }
  expect_sound(wheel_mesh(*load_profile("standard:S1002", ProfileKind::wheel), 460.0,
                          {.chord_error_mm = 0.5, .max_edge_mm = 20.0}),
               "short edges");
  expect_sound(axle_mesh(1360.0, wheel_bore_radius_mm(460.0), {.chord_error_mm = 0.1}), "axle");
}

// Measured points carry noise, and a worn head ends where the measurement did.
TEST(Mesh, IsSoundForMeasuredProfiles) {
  const std::string demo = std::string(RUNBAND_DATA) + "/demo/";
  for (const char* name : {"rail_high_new.csv", "rail_high_worn.csv", "rail_low.csv"})
    expect_sound(rail_mesh(*load_profile(demo + name, ProfileKind::rail), 0.0, 50.0), name);
  for (const char* name : {"wheel_new.csv", "wheel_worn.csv"})
    expect_sound(wheel_mesh(*load_profile(demo + name, ProfileKind::wheel), 460.0, {.chord_error_mm = 0.3}), name);
}

// 60E1 (EN 13674-1): height 172 mm, foot 150 mm, section 76.70 cm2 (memory). The body is plain, so its area may differ
// a little; height and foot follow the head's width of 72 mm.
TEST(RailMesh, HasTheProportionsOfARail) {
  const auto rail = load_profile("standard:60E1", ProfileKind::rail);
  const TriangleMesh mesh = rail_mesh(*rail, 0.0, 100.0);
  EXPECT_NEAR(highest(mesh).z(), 0.0, 1e-9);
  EXPECT_NEAR(lowest(mesh).z(), -172.0, 0.5);
  EXPECT_NEAR(highest(mesh).y() - lowest(mesh).y(), 150.0, 0.5);
  EXPECT_NEAR(volume(mesh) / 100.0, 7670.0, 0.06 * 7670.0);
  EXPECT_EQ(lowest(mesh).x(), 0.0);
  EXPECT_EQ(highest(mesh).x(), 100.0);
}

TEST(RailMesh, VolumeIsSectionTimesLength) {
  const TriangleMesh one = rail_mesh(round_rail(), 0.0, 10.0);
  const TriangleMesh seven = rail_mesh(round_rail(), -20.0, 50.0);
  EXPECT_NEAR(volume(seven) / volume(one), 7.0, 1e-9);
}

// Pappus: volume = 2 pi times the section's moment about the axle; the polygon of the revolution is smaller by
// sin(2 pi / n) n / (2 pi).
TEST(WheelMesh, VolumeObeysPappus) {
  const TriangleMesh mesh = wheel_mesh(coned_wheel(), 460.0, {.chord_error_mm = 0.05});
  std::vector<Vec2> section;  // (y, radius) of the ring at angle 0
  for (const Vec3& v : mesh.vertices) {
    if (v.x() != 0.0 || v.z() >= 0.0) break;
    section.emplace_back(v.y(), -v.z());
  }
  const std::size_t whole_rings = mesh.vertices.size() / section.size();
  const auto rings = static_cast<double>(whole_rings);
  double moment = 0.0;
  for (std::size_t i = 0; i < section.size(); ++i) {
    const Vec2 a = section[i], b = section[(i + 1) % section.size()];
    moment += (a.x() - b.x()) * (a.y() * a.y() + a.y() * b.y() + b.y() * b.y()) / 6.0;
  }
  const double polygon = std::sin(2.0 * kPi / rings) * rings / (2.0 * kPi);
  EXPECT_NEAR(volume(mesh) / (2.0 * kPi * std::abs(moment) * polygon), 1.0, 1e-10);
}

// Both ways: no point of the true head is further from the mesh than the chord error, and no triangle bulges beyond it.
TEST(RailMesh, KeepsItsChordError) {
  const auto rail = load_profile("standard:60E1", ProfileKind::rail);
  for (const double chord_error : {0.3, 0.03, 0.003}) {
    const TriangleMesh mesh = rail_mesh(*rail, 0.0, 1.0, {.chord_error_mm = chord_error});
    std::vector<Vec2> ring;
    for (const Vec3& v : mesh.vertices)
      if (v.x() == 0.0) ring.emplace_back(v.y(), v.z());
    double worst = 0.0;
    const double t0 = rail->curve->t_begin(), t1 = rail->curve->t_end();
    for (int i = 0; i <= 5000; ++i) {
      const Vec2 p = rail->curve->at(t0 + (t1 - t0) * i / 5000.0).position;
      double nearest = 1e9;
      for (std::size_t k = 0; k < ring.size(); ++k)
        nearest = std::min(nearest, distance_to_segment(p, ring[k], ring[(k + 1) % ring.size()]));
      worst = std::max(worst, nearest);
    }
    EXPECT_LT(worst, kSamplerMargin * chord_error);
    EXPECT_GT(worst, 0.2 * chord_error) << "finer than asked: wasteful";
  }
}

TEST(WheelMesh, KeepsItsChordErrorAcrossAndAround) {
  constexpr double kRadius = 460.0;
  constexpr double kChordError = 0.4;
  const auto wheel = load_profile("standard:S1002", ProfileKind::wheel);
  const TriangleMesh mesh = wheel_mesh(*wheel, kRadius, {.chord_error_mm = kChordError});
  const auto vertex = [&](int i) { return mesh.vertices[static_cast<std::size_t>(i)]; };
  const double t0 = wheel->curve->t_begin(), t1 = wheel->curve->t_end();
  std::mt19937 generator(11);
  std::uniform_real_distribution<double> share(0.0, 1.0);
  double worst = 0.0;
  for (int i = 0; i < 300; ++i) {
    const Vec2 p = wheel->curve->at(t0 + (t1 - t0) * share(generator)).position;
    const double angle = 2.0 * kPi * share(generator);
    const double radius = kRadius - p.y();
    const Vec3 point(radius * std::sin(angle), p.x(), -radius * std::cos(angle));
    double nearest = 1e9;
    for (const auto& [a, b, c] : mesh.triangles) {
      if ((vertex(a) - point).squaredNorm() > 60.0 * 60.0) continue;
      nearest = std::min(nearest, distance_to_triangle(point, vertex(a), vertex(b), vertex(c)));
    }
    worst = std::max(worst, nearest);
  }
  EXPECT_LT(worst, kSamplerMargin * kChordError);
  EXPECT_GT(worst, 0.3 * kChordError);

  // The other way: middles of triangles that lie on the profile, against a dense sampling of the true section.
  std::vector<Vec2> dense;
  for (const CurvePoint& point : sample_curve(*wheel->curve, 1e-4, 0.05)) dense.push_back(point.position);
  const auto distance_to_profile = [&](const Vec2& p) {
    double nearest = 1e9;
    for (std::size_t i = 0; i + 1 < dense.size(); ++i)
      nearest = std::min(nearest, distance_to_segment(p, dense[i], dense[i + 1]));
    return nearest;
  };
  int seen = 0;
  for (std::size_t i = 0; i < mesh.triangles.size() && seen < 200; i += 7) {
    const auto& [a, b, c] = mesh.triangles[i];
    const auto section = [&](const Vec3& v) { return Vec2(v.y(), kRadius - std::hypot(v.x(), v.z())); };
    if (distance_to_profile(section(vertex(a))) > 1e-3 || distance_to_profile(section(vertex(b))) > 1e-3 ||
        distance_to_profile(section(vertex(c))) > 1e-3)
      continue;
    ++seen;
    EXPECT_LT(distance_to_profile(section((vertex(a) + vertex(b) + vertex(c)) / 3.0)), kSamplerMargin * kChordError);
  }
  EXPECT_GT(seen, 50);
}

TEST(WheelMesh, TheTreadAtAngleZeroHangsStraightDown) {
  const TriangleMesh mesh = wheel_mesh(coned_wheel(), 460.0, {.chord_error_mm = 0.2, .max_edge_mm = 5.0});
  int on_tread = 0;
  for (const Vec3& v : mesh.vertices) {
    const bool below = std::abs(v.x()) < 1e-9 && v.z() < -440.0;
    if (below && std::abs(-v.z() - (460.0 - 0.05 * v.y())) < 1e-9) ++on_tread;
  }
  EXPECT_GE(on_tread, 27);                      // 135 mm in steps of at most 5
  EXPECT_NEAR(lowest(mesh).z(), -463.5, 1e-6);  // flange side of the cone, at y = -70
}

TEST(Mesh, EdgesStayShorterThanAsked) {
  const TriangleMesh mesh = rail_mesh(round_rail(), 0.0, 50.0, {.chord_error_mm = 1.0, .max_edge_mm = 4.0});
  // Edges of the sweep, not of the caps: those join neighbouring stations or neighbouring section points.
  for (const auto& triangle : mesh.triangles) {
    for (std::size_t i = 0; i < 3; ++i) {
      const Vec3 edge = mesh.vertices[static_cast<std::size_t>(triangle[(i + 1) % 3])] -
                        mesh.vertices[static_cast<std::size_t>(triangle[i])];
      EXPECT_TRUE(edge.x() == 0.0 || edge.norm() < 4.0 * std::numbers::sqrt2 + 1e-9);
    }
  }
  EXPECT_GT(mesh.triangles.size(), 2U * 13U * 100U);
}

TEST(Mesh, MirroringKeepsTheOutsideOut) {
  const TriangleMesh left = rail_mesh(round_rail(), 0.0, 50.0);
  Eigen::Matrix3d mirror = Eigen::Matrix3d::Identity();
  mirror(1, 1) = -1.0;
  const TriangleMesh right = transformed(left, mirror, Vec3(0.0, -750.0, 0.0));
  EXPECT_NEAR(volume(right) / volume(left), 1.0, 1e-9);
  EXPECT_NEAR(highest(right).y(), -750.0 - lowest(left).y(), 1e-9);
  expect_sound(right, "mirrored");
  const Eigen::Matrix3d turn = Eigen::AngleAxisd(0.3, Vec3(1, 2, 3).normalized()).toRotationMatrix();
  EXPECT_NEAR(volume(transformed(left, turn, Vec3(1, 2, 3))) / volume(left), 1.0, 1e-9);
}

template <typename Call>
InputError refusal(Call call) {
  try {
    call();
  } catch (const InputError& error) {
    return error;
  }
  return {ErrorCode::unknown_name, "accepted", ""};
}

TEST(Mesh, TooManyTrianglesNameAChordErrorThatFits) {
  const InputError error =
      refusal([] { wheel_mesh(coned_wheel(), 460.0, {.chord_error_mm = 1e-4, .max_triangles = 50000}); });
  EXPECT_EQ(error.code(), ErrorCode::out_of_range);
  EXPECT_NE(error.message().find("the limit is 5e+04"), std::string::npos) << error.message();
  const std::string& cure = error.cure();
  const std::string lead = "a chord_error_mm of ";
  ASSERT_EQ(cure.rfind(lead, 0), 0U) << cure;
  const double fitting = std::stod(cure.substr(lead.size()));
  EXPECT_LE(wheel_mesh(coned_wheel(), 460.0, {.chord_error_mm = fitting, .max_triangles = 50000}).triangles.size(),
            50000U);
  // Where the edge length is what makes them many, that is what is named.
  const InputError edges =
      refusal([] { rail_mesh(round_rail(), 0.0, 1e6, {.chord_error_mm = 0.1, .max_edge_mm = 1.0}); });
  EXPECT_EQ(edges.cure(), "set max_edge_mm larger.");
}

TEST(Mesh, OptionsOutOfRangeAreNamed) {
  constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
  const auto expect_named = [](const InputError& error, const std::string& name) {
    EXPECT_EQ(error.code(), ErrorCode::out_of_range) << name;
    EXPECT_NE(error.message().find(name), std::string::npos) << error.message();
  };
  for (const double bad : {0.0, -1.0, kNan, std::numeric_limits<double>::infinity(), 1e-9})
    expect_named(refusal([&] { rail_mesh(round_rail(), 0.0, 1.0, {.chord_error_mm = bad}); }), "chord_error_mm");
  expect_named(refusal([] { rail_mesh(round_rail(), 0.0, 1.0, {.max_edge_mm = 0.0}); }), "max_edge_mm");
  expect_named(refusal([] { rail_mesh(round_rail(), 1.0, 1.0); }), "x1_mm");
  expect_named(refusal([&] { rail_mesh(round_rail(), kNan, 1.0); }), "x1_mm");
  expect_named(refusal([] { wheel_mesh(coned_wheel(), 0.0); }), "rolling_radius_mm");
  expect_named(refusal([] { wheel_mesh(coned_wheel(), 3.0); }), "rolling_radius_mm");
  expect_named(refusal([] { axle_mesh(100.0, 92.0); }), "back_to_back_mm");
}

TEST(RailMesh, ASectionThatCrossesItselfIsRefused) {
  const Profile loop = profile_of(ProfileKind::rail, [](double t) {
    const double a = 2.0 * kPi * t;
    return Vec2(-36.0 + 72.0 * t + 25.0 * std::sin(2.0 * a), -10.0 + 10.0 * std::cos(3.0 * a));
  });
  const InputError error = refusal([&] { rail_mesh(loop, 0.0, 1.0); });
  EXPECT_EQ(error.code(), ErrorCode::profile_crosses_itself);
  EXPECT_EQ(error.message(), "drawn: the closed section crosses itself.");
}

TEST(CheckMesh, SeesWhatIsWrong) {
  const MeshReport good = check_mesh(tetrahedron());
  EXPECT_TRUE(good.closed && good.manifold && good.oriented_outward && !good.self_intersecting);
  EXPECT_NEAR(good.volume_mm3, 1.0 / 6.0, 1e-15);

  TriangleMesh hole = tetrahedron();
  hole.triangles.pop_back();
  EXPECT_FALSE(check_mesh(hole).closed);
  EXPECT_TRUE(check_mesh(hole).manifold);

  TriangleMesh inside_out = tetrahedron();
  for (auto& t : inside_out.triangles) std::swap(t[0], t[1]);
  EXPECT_TRUE(check_mesh(inside_out).closed);
  EXPECT_FALSE(check_mesh(inside_out).oriented_outward);

  TriangleMesh one_turned = tetrahedron();
  std::swap(one_turned.triangles[2][0], one_turned.triangles[2][1]);
  EXPECT_FALSE(check_mesh(one_turned).manifold);

  TriangleMesh fin = tetrahedron();
  fin.vertices.emplace_back(1, 1, 1);
  fin.triangles.push_back({0, 1, 4});
  EXPECT_FALSE(check_mesh(fin).manifold);
  EXPECT_FALSE(check_mesh(fin).closed);

  TriangleMesh two = tetrahedron();
  const TriangleMesh other = tetrahedron(Vec3(0.2, 0.2, 0.2));
  for (const Vec3& v : other.vertices) two.vertices.push_back(v);
  for (const auto& t : other.triangles) two.triangles.push_back({t[0] + 4, t[1] + 4, t[2] + 4});
  EXPECT_TRUE(check_mesh(two).self_intersecting);
  EXPECT_FALSE(check_mesh(two, false).self_intersecting);

  EXPECT_FALSE(check_mesh(TriangleMesh{}).closed);
  TriangleMesh wild = tetrahedron();
  wild.triangles[1][2] = 9;
  EXPECT_EQ(refusal([&] { check_mesh(wild); }).message(), "mesh: triangle 1 names vertex 9 of 4.");
}

}  // namespace
}  // namespace runband
