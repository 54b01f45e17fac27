// A wheel or rail profile: how it is read, checked, fitted and described.
#pragma once

#include <filesystem>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "core/base/quantities.h"
#include "core/profile/curve.h"

namespace runband {

enum class ProfileKind { wheel, rail };

/// How to read a file of points. What is left empty is taken from the file's header or recognised from the shape.
struct ProfileOptions {
  std::optional<double>
      noise_mm;        ///< standard deviation of the measurement, >= 0; empty: from the file, else estimated
  std::string unit;    ///< "mm", "m", "in", "um" or empty
  std::string y_axis;  ///< "field", "gauge" (which side positive y points to) or empty
  std::string z_axis;  ///< "up", "down" or empty
};

/// Something the reader should know of a profile that could still be used.
struct Finding {
  std::string code;        ///< snake_case, stable
  std::string text;        ///< a sentence
  long first_row = 0;      ///< 1-based line in the file, 0 if not of a line
  Vec2 at = Vec2::Zero();  ///< profile frame, mm
};

/// How measured points were smoothed.
struct ProfileFit {
  double noise_mm = 0;  ///< stated or estimated standard deviation
  bool noise_estimated = false;
  double residual_rms_mm = 0;  ///< of points against the fitted curve, along its normal
  double residual_max_mm = 0;
  double smoothing = 0;  ///< weight of the roughness penalty that noise led to
  double effective_parameters = 0;
};

/// Immutable; share it.
struct Profile {
  ProfileKind kind = ProfileKind::wheel;
  std::string title;
  std::string source;      ///< standard or measurement
  std::string provenance;  ///< where the digits come from
  std::string origin;      ///< path or "standard:NAME"
  std::string checksum;    ///< of the file's bytes, hexadecimal
  std::shared_ptr<const ProfileCurve> curve;
  std::vector<Vec2> points;  ///< as read, in the profile frame, from gauge to field side; empty for a definition
  std::optional<ProfileFit> fit;
  std::vector<Finding> findings;
};

/// Loads "standard:NAME", a .toml definition or a file of points. A relative path is taken from `base_folder`.
/// @throws InputError (11x, 10x) with file and line; FileError.
std::shared_ptr<const Profile> load_profile(const std::string& spec, ProfileKind kind,
                                            const ProfileOptions& options = {},
                                            const std::filesystem::path& base_folder = {});

/// A profile from points already in the profile frame (mm), fitted with the given noise. `name` appears in messages.
std::shared_ptr<const Profile> profile_from_points(std::vector<Vec2> points, ProfileKind kind, double noise_mm,
                                                   const std::string& name = "points");

/// Names that "standard:NAME" takes, with titles.
std::vector<std::pair<std::string, std::string>> standard_profiles();

/// The figures that the trade reads off a profile, as named quantities (flange height, thickness and slope dimension,
/// hollow depth, head width, ...; wear against `reference` if given).
std::vector<Quantity> describe_profile(const Profile& profile, const Profile* reference = nullptr);
/// Profile minus reference along the reference's normal, over y. Unit: mm, positive where material is missing.
Curve wear_against(const Profile& profile, const Profile& reference);

}  // namespace runband
