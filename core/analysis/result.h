// What one analysis returned for one contact or for the wheelset as a whole.
#pragma once

#include <string>
#include <vector>

#include "core/base/quantities.h"

namespace runband {

struct AnalysisResult {
  std::string id;
  std::vector<Field> fields;
  std::vector<Curve> curves;
  std::vector<Quantity> quantities;
  std::vector<Mark> marks;
  std::vector<Volume> volumes;
  std::vector<Caution> cautions;
};

}  // namespace runband
