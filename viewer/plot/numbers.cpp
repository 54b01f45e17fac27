#include "viewer/plot/numbers.h"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <limits>

namespace runband::plot {

namespace {
constexpr const char* kMinus = "\u2212";
constexpr const char* kThinSpace = "\u2009";
// A tick that rounding has pushed this far (in steps) outside the range still counts.
constexpr double kTickSlack = 1e-9;
}  // namespace

void Range::include(double v) {
  if (!std::isfinite(v)) return;
  low = std::min(low, v);
  high = std::max(high, v);
}

Range empty_range() { return {std::numeric_limits<double>::infinity(), -std::numeric_limits<double>::infinity()}; }

std::string number(double value, int decimals) {
  if (std::isnan(value)) return "\u2013";
  if (std::isinf(value)) return value < 0 ? std::string(kMinus) + "\u221e" : "\u221e";
  char buffer[400];
  const auto end =
      std::to_chars(buffer, buffer + sizeof buffer, std::abs(value), std::chars_format::fixed, std::max(0, decimals));
  const std::string digits(buffer, end.ptr);
  const std::size_t whole = std::min(digits.find('.'), digits.size());
  const bool zero = digits.find_first_of("123456789") == std::string::npos;
  std::string text = value < 0 && !zero ? kMinus : "";
  for (std::size_t i = 0; i < digits.size(); ++i) {
    if (i > 0 && i < whole && (whole - i) % 3 == 0) text += kThinSpace;
    text += digits[i];
  }
  return text;
}

std::string number_with_digits(double value, int digits) {
  if (!std::isfinite(value) || value == 0.0) return number(value, 0);
  const int leading = static_cast<int>(std::floor(std::log10(std::abs(value)))) + 1;
  return number(value, std::clamp(digits - leading, 0, 6));
}

std::string power_of_ten(int exponent) {
  constexpr const char* kSuperscripts[] = {"\u2070", "\u00b9", "\u00b2", "\u00b3", "\u2074",
                                           "\u2075", "\u2076", "\u2077", "\u2078", "\u2079"};
  std::string text = "10";
  if (exponent < 0) text += "\u207b";
  for (const char c : std::to_string(std::abs(exponent))) text += kSuperscripts[c - '0'];
  return text;
}

std::vector<Tick> linear_ticks(const Range& range, int most) {
  std::vector<Tick> ticks;
  if (!(range.span() > 0) || !std::isfinite(range.span())) return ticks;
  most = std::max(most, 2);
  const double rough = range.span() / most;
  const double decade = std::pow(10.0, std::floor(std::log10(rough)));
  double step = decade;
  int parts = 5;
  for (const auto& [factor, minor] : {std::pair{1.0, 5}, {2.0, 4}, {5.0, 5}, {10.0, 5}, {20.0, 4}}) {
    step = factor * decade;
    parts = minor;
    if (std::floor(range.high / step + kTickSlack) - std::ceil(range.low / step - kTickSlack) + 1 <= most) break;
  }
  const int decimals = std::max(0, -static_cast<int>(std::floor(std::log10(step) + kTickSlack)));
  const double fine = step / parts;
  const auto first = static_cast<long>(std::ceil(range.low / fine - kTickSlack));
  const auto last = static_cast<long>(std::floor(range.high / fine + kTickSlack));
  for (long k = first; k <= last; ++k) {
    const double value = static_cast<double>(k) * fine;
    const bool major = k % parts == 0;
    ticks.push_back({value, major ? number(value, decimals) : "", major});
  }
  return ticks;
}

std::vector<Tick> logarithmic_ticks(const Range& range, int most) {
  std::vector<Tick> ticks;
  if (!(range.low > 0) || !(range.high > range.low)) return ticks;
  const int first = static_cast<int>(std::floor(std::log10(range.low)));
  const int last = static_cast<int>(std::ceil(std::log10(range.high)));
  const double decades = std::log10(range.high / range.low);
  const int every = std::max(1, static_cast<int>(std::ceil(decades / std::max(1, most))));
  for (int k = first; k <= last; ++k) {
    const double decade = std::pow(10.0, k);
    for (int m = 1; m < 10; ++m) {
      const double value = m * decade;
      if (value < range.low * (1 - kTickSlack) || value > range.high * (1 + kTickSlack)) continue;
      if (m == 1) {
        const bool named = k % every == 0;
        ticks.push_back({value, named ? power_of_ten(k) : "", true});
      } else if (decades <= 2 && (m == 2 || m == 5)) {
        ticks.push_back({value, number(value, std::max(0, -k)), true});
      } else {
        ticks.push_back({value, "", false});
      }
    }
  }
  return ticks;
}

double drawing_scale(double scale) {
  if (!(scale > 0)) return 1.0;
  const double decade = std::pow(10.0, std::floor(std::log10(scale) + kTickSlack));
  // Enlargements 2, 5, 10; reductions 1/2, 1/5, 1/10: the same series 1, 2, 5 upwards and 0.5, 0.2, 0.1 downwards.
  for (const double factor : {5.0, 2.0, 1.0})
    if (factor * decade <= scale * (1 + kTickSlack)) return factor * decade;
  return decade;
}

std::string scale_text(double scale) {
  if (scale >= 1) return number_with_digits(scale, scale < 10 && scale != std::round(scale) ? 2 : 1) + " : 1";
  return "1 : " + number_with_digits(1 / scale, 1);
}

}  // namespace runband::plot
