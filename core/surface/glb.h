// glTF 2.0 in its binary form: one mesh with normals and, if it has a scalar, vertex colours.
#pragma once

#include <string>

#include "core/surface/mesh.h"

namespace runband {

/// The bytes of a .glb file. Metres, y up (the z axis of the mesh becomes y); edges sharper than 30 degrees stay sharp.
/// @source Khronos Group, glTF 2.0 Specification.
std::string glb_bytes(const TriangleMesh& mesh);

}  // namespace runband
