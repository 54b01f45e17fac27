#include "core/base/version.h"

namespace runband {

const char* version() { return RUNBAND_VERSION; }

}  // namespace runband
