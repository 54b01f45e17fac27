// Where the camera can be put by name.
#pragma once

namespace runband {

enum class NamedView { home, front, side, top, along_rail, left_contact, right_contact };

}  // namespace runband
