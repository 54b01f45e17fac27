// A case being worked on: undo and redo, saved or not, kept safe.
#pragma once

#include <filesystem>
#include <functional>
#include <string>
#include <vector>

#include "core/case/case.h"

namespace runband {

class Document {
 public:
  Document() = default;
  explicit Document(Case opened, std::filesystem::path file = {});

  const Case& current() const { return states_[at_].state; }
  /// Changes the case as one step that undo takes back. Edits with the same non-empty `merge` in a row, until
  /// end_gesture(), are one step. @return false if nothing changed
  bool edit(const std::string& what, const std::string& merge, const std::function<void(Case&)>& change);
  void end_gesture() { merge_.clear(); }

  bool can_undo() const { return at_ > 0; }
  bool can_redo() const { return at_ + 1 < states_.size(); }
  void undo();
  void redo();
  std::string undo_words() const { return can_undo() ? states_[at_].what : ""; }
  std::string redo_words() const { return can_redo() ? states_[at_ + 1].what : ""; }

  /// Raised by every change of the case.
  std::uint64_t revision() const { return revision_; }
  bool unsaved() const;
  /// Empty until it is opened from or saved to a file.
  const std::filesystem::path& file() const { return file_; }
  std::string name() const;

  /// Writes the case; profile paths are rewritten so that they still point to their files. @throws FileError
  void save_as(const std::filesystem::path& file);
  /// The case as a file in `folder` would hold it.
  std::string text_for(const std::filesystem::path& folder) const;
  /// What was found after a crash replaces the case as one step.
  void recover(Case recovered);

 private:
  struct State {
    Case state;
    std::string text, what;
  };
  std::vector<State> states_{{{}, {}, {}}};
  std::size_t at_ = 0;
  std::string merge_, saved_text_;
  std::filesystem::path file_;
  std::uint64_t revision_ = 0;
};

}  // namespace runband
