#pragma once

namespace runband {

/// "0.1.0".
const char* version();

}  // namespace runband
