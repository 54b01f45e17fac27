// What the words after `runband` mean.
#pragma once

#include "core/base/progress.h"

namespace runband {

/// Parses, runs the verb, returns its exit status. @throws Error for what a verb refuses.
int run_command_line(int argc, char** argv, const Progress& progress);

}  // namespace runband
