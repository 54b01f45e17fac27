#include "viewer/desk/actions.h"

#include <algorithm>
#include <sstream>
#include <stdexcept>

namespace runband {

namespace {

std::string lower(std::string words) {
  std::transform(words.begin(), words.end(), words.begin(),
                 [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return words;
}

/// How well a word is met: 3 at the start, 2 at the start of a word, 1 inside, 0 not at all.
int met(const std::string& text, const std::string& part) {
  const std::size_t at = text.find(part);
  if (at == std::string::npos) return 0;
  if (at == 0) return 3;
  return text.find(" " + part) != std::string::npos ? 2 : 1;
}

}  // namespace

std::string Chord::words() const {
  if (key.empty()) return "";
  return std::string(control ? "Ctrl+" : "") + (alt ? "Alt+" : "") + (shift ? "Shift+" : "") + key;
}

void Actions::add(Action action) {
  if (find(action.id) != nullptr) throw std::logic_error("action " + action.id + " is there twice");
  if (!action.chord.key.empty() && of(action.chord) != nullptr)
    throw std::logic_error(action.chord.words() + " has two actions: " + of(action.chord)->id + " and " + action.id);
  actions_.push_back(std::move(action));
}

const Action* Actions::find(const std::string& id) const {
  const auto found = std::find_if(actions_.begin(), actions_.end(), [&](const Action& a) { return a.id == id; });
  return found == actions_.end() ? nullptr : &*found;
}

const Action* Actions::of(const Chord& chord) const {
  const auto found = std::find_if(actions_.begin(), actions_.end(), [&](const Action& a) { return a.chord == chord; });
  return found == actions_.end() ? nullptr : &*found;
}

bool Actions::run(const std::string& id) const {
  const Action* action = find(id);
  if (action == nullptr || (action->enabled && !action->enabled())) return false;
  action->run();
  return true;
}

std::vector<const Action*> Actions::matching(const std::string& query) const {
  std::vector<std::pair<int, const Action*>> found;
  std::vector<std::string> parts;
  std::istringstream words(lower(query));
  for (std::string part; words >> part;) parts.push_back(part);
  for (const Action& action : actions_) {
    const std::string text = lower(action.words), about = lower(action.group + " " + action.help);
    int score = 1;
    for (const std::string& part : parts) {
      const int one = std::max(4 * met(text, part), met(about, part));
      score = one == 0 ? 0 : score + one;
      if (score == 0) break;
    }
    if (score > 0) found.emplace_back(score, &action);
  }
  std::stable_sort(found.begin(), found.end(), [](const auto& a, const auto& b) { return a.first > b.first; });
  std::vector<const Action*> result;
  for (const auto& [score, action] : found) result.push_back(action);
  return result;
}

}  // namespace runband
