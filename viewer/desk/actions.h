// Everything that can be done, by name and key: the palette, the shortcuts page and the keyboard all read this list.
#pragma once

#include <functional>
#include <optional>
#include <string>
#include <vector>

namespace runband {

/// "Ctrl+Shift+S" as data. `key` is "S", "F1", "Left", "Space", "1", "+", ...; empty: reached by the palette alone.
struct Chord {
  std::string key;
  bool control = false, shift = false, alt = false;
  bool operator==(const Chord&) const = default;
  std::string words() const;
};

struct Action {
  std::string id;     ///< "case.save", stable
  std::string words;  ///< a verb phrase: "Save"
  std::string group;  ///< "File", "Case", "View", ...
  Chord chord;
  std::string help;  ///< a sentence
  std::function<void()> run;
  std::function<bool()> enabled;  ///< empty: always
  bool while_typing = false;      ///< heard even while a field of text has the keyboard
};

class Actions {
 public:
  /// @throws std::logic_error if the id or the chord is taken.
  void add(Action action);
  const std::vector<Action>& all() const { return actions_; }
  const Action* find(const std::string& id) const;
  /// Runs it if it is enabled. @return false if there is none or it is not enabled now
  bool run(const std::string& id) const;
  const Action* of(const Chord& chord) const;
  /// Those whose words hold every part of the query, best first.
  std::vector<const Action*> matching(const std::string& query) const;

 private:
  std::vector<Action> actions_;
};

}  // namespace runband
