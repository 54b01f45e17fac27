// Stresses below a point load on an elastic half-space.
#pragma once

namespace runband::subsurface {

/// xx, yy, zz, xy, xz, yz; tension positive. x and y in the surface, z into the body.
struct Stress {
  double xx = 0, yy = 0, zz = 0, xy = 0, xz = 0, yz = 0;
};

/// Unit force pressing into the surface (+z) at the origin. @param x, y, z mm, z > 0. Unit: 1/mm2.
/// @source J. Boussinesq 1885; K. L. Johnson, Contact Mechanics (1985), eq. 3.19 (memory; equilibrium, trace and the
///         closed forms on the axis are tested).
Stress under_normal_force(double x, double y, double z, double poisson_ratio);

/// Unit force along +x in the surface at the origin.
/// @source V. Cerruti 1882; Johnson, eq. 3.75 (memory; tested as above).
Stress under_force_along_x(double x, double y, double z, double poisson_ratio);

double von_mises(const Stress& s);
/// Half the difference of the largest and the smallest principal stress.
double largest_shear(const Stress& s);

}  // namespace runband::subsurface
