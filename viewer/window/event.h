// What a user does to a window, whoever the window belongs to.
#pragma once

#include <string>
#include <vector>

namespace runband {

enum class Key {
  none,
  tab,
  left,
  right,
  up,
  down,
  page_up,
  page_down,
  home,
  end,
  insert,
  erase /* Delete */,
  backspace,
  space,
  enter,
  escape,
  plus,
  minus,
  comma,
  period,
  slash,
  question,
  bracket_left,
  bracket_right,
  a,
  b,
  c,
  d,
  e,
  f,
  g,
  h,
  i,
  j,
  k,
  l,
  m,
  n,
  o,
  p,
  q,
  r,
  s,
  t,
  u,
  v,
  w,
  x,
  y,
  z,
  n0,
  n1,
  n2,
  n3,
  n4,
  n5,
  n6,
  n7,
  n8,
  n9,
  f1,
  f2,
  f3,
  f4,
  f5,
  f6,
  f7,
  f8,
  f9,
  f10,
  f11,
  f12,
  count
};

struct Modifiers {
  bool control = false, shift = false, alt = false;
  bool operator==(const Modifiers&) const = default;
};

enum class MouseButton { left = 0, right = 1, middle = 2 };

struct Event {
  enum class Kind { move, button, wheel, key, text, drop, leave, close };
  Kind kind = Kind::move;
  double x = 0, y = 0;  ///< move: in pixels of the framebuffer from the top left; wheel: notches
  MouseButton button = MouseButton::left;
  bool down = false;      ///< button, key
  bool repeated = false;  ///< key
  Key key = Key::none;
  Modifiers modifiers;             ///< of every event
  char32_t letter = 0;             ///< text
  std::vector<std::string> files;  ///< drop
};

}  // namespace runband
