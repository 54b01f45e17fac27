// Numbers as a reader wants them: true minus, thin spaces in thousands, ticks at round values.
#pragma once

#include <string>
#include <vector>

namespace runband::plot {

/// From low to high.
struct Range {
  double low = 0, high = 1;
  double span() const { return high - low; }
  bool contains(double v) const { return v >= low && v <= high; }
  void include(double v);  ///< ignores not-a-number and infinity
  bool operator==(const Range&) const = default;
};
/// Contains nothing; include() makes it real.
Range empty_range();

/// Fixed decimals, "−" for minus, thin space (U+2009) between groups of three in the whole part, never "−0".
/// Not-a-number and infinity read as "–" and "∞".
std::string number(double value, int decimals);
/// As many decimals as leave about `digits` significant ones (at most 6 decimals, at least none).
std::string number_with_digits(double value, int digits);
/// "10³" with superscript digits.
std::string power_of_ten(int exponent);

struct Tick {
  double value = 0;
  std::string text;  ///< empty for a minor tick
  bool major = true;
};
/// Ticks at 1, 2 or 5 times a power of ten inside the range, at most `most` labelled ones, every one with the same
/// decimals; minor ticks between them.
std::vector<Tick> linear_ticks(const Range&, int most);
/// Decades labelled as powers of ten, minor ticks at 2 ... 9; a range within two decades also labels 2 and 5.
std::vector<Tick> logarithmic_ticks(const Range&, int most);

/// Scales of ISO 5455 ("1 : 2", "5 : 1", ...): the largest not above `scale` (drawing length over true length).
double drawing_scale(double scale);
/// "5 : 1".
std::string scale_text(double scale);

}  // namespace runband::plot
