// A case as a TOML table: the one place where keys are written. Files, JSON and pictures that carry their case use it.
#pragma once

#include <toml++/toml.h>

#include "core/case/case.h"

namespace runband {

toml::table case_table(const Case&);

}  // namespace runband
