// The surface that wheel and rail share once they are pressed together, strip by strip across the patch.
#pragma once

#include "core/analysis/analysis.h"

namespace runband {

/// Midway between the undeformed profiles (like materials give way alike); its height above the tangent plane and its
/// tilt, from the profiles themselves. Flat where there are none. Where a profile ends, its last height goes on.
class CommonSurface {
 public:
  CommonSurface() = default;
  CommonSurface(const Pairing& pairing, const ContactZone& zone);

  struct Strip {
    double height_mm = 0, slope = 0;
  };
  /// @param s_mm across, from the touching point, + towards the field side.
  Strip at(double s_mm) const;

 private:
  struct Body {
    const ProfileCurve* curve = nullptr;
    CurvePoint origin;
    Strip at(double s_mm) const;
  };
  static Body body(const ProfileCurve& curve, double y_mm, double z_mm);
  Body wheel_, rail_;
};

}  // namespace runband
