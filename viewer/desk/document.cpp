#include "viewer/desk/document.h"

#include "core/base/file.h"

namespace runband {

namespace {

constexpr std::size_t kMostSteps = 2000;

std::string path_from(const std::string& profile, const std::filesystem::path& from, const std::filesystem::path& to) {
  if (profile.empty() || profile.starts_with("standard:") || std::filesystem::path(profile).is_absolute())
    return profile;
  std::error_code none;
  const auto whole = std::filesystem::weakly_canonical(from / profile, none);
  const auto base = std::filesystem::weakly_canonical(to, none);
  const auto relative = whole.lexically_relative(base);
  // Far away, the whole path is easier to read than a ladder of "..".
  if (relative.empty()) return whole.string();
  int up = 0;
  for (const auto& part : relative) up += part == ".." ? 1 : 0;
  return up > 2 ? whole.string() : relative.string();
}

}  // namespace

Document::Document(Case opened, std::filesystem::path file) : file_(std::move(file)) {
  std::string text = write_case(opened);
  saved_text_ = text;
  states_ = {{std::move(opened), std::move(text), {}}};
}

bool Document::edit(const std::string& what, const std::string& merge, const std::function<void(Case&)>& change) {
  Case changed = current();
  change(changed);
  std::string text = write_case(changed);
  if (text == states_[at_].text && changed.folder == current().folder) return false;
  const bool joins = !merge.empty() && merge == merge_ && at_ > 0 && at_ + 1 == states_.size();
  states_.resize(at_ + 1);
  if (joins) {
    states_[at_] = {std::move(changed), std::move(text), what};
  } else {
    states_.push_back({std::move(changed), std::move(text), what});
    if (states_.size() > kMostSteps) states_.erase(states_.begin());
    at_ = states_.size() - 1;
  }
  merge_ = merge;
  ++revision_;
  return true;
}

void Document::undo() {
  if (!can_undo()) return;
  --at_;
  merge_.clear();
  ++revision_;
}

void Document::redo() {
  if (!can_redo()) return;
  ++at_;
  merge_.clear();
  ++revision_;
}

bool Document::unsaved() const { return states_[at_].text != saved_text_; }

std::string Document::name() const {
  if (!current().title.empty()) return current().title;
  return file_.empty() ? "untitled" : file_.filename().string();
}

std::string Document::text_for(const std::filesystem::path& folder) const {
  Case moved = current();
  for (int k = 0; k < 2; ++k) {
    moved.wheels[k].profile = path_from(moved.wheels[k].profile, moved.folder, folder);
    moved.rails[k].profile = path_from(moved.rails[k].profile, moved.folder, folder);
  }
  if (moved.bench) moved.bench->gap_file = path_from(moved.bench->gap_file, moved.folder, folder);
  moved.folder = folder;
  return write_case(moved);
}

void Document::save_as(const std::filesystem::path& file) {
  const std::filesystem::path folder = std::filesystem::absolute(file).parent_path();
  const std::string text = text_for(folder);
  write_file(file, text);
  file_ = file;
  std::error_code none;
  if (!std::filesystem::equivalent(folder, current().folder, none)) {
    Case moved = parse_case(text, file.string(), folder);
    std::string moved_text = write_case(moved);
    states_[at_] = {std::move(moved), std::move(moved_text), states_[at_].what};
    ++revision_;
  }
  saved_text_ = states_[at_].text;
}

void Document::recover(Case recovered) {
  edit("Recover", "", [&](Case& c) { c = std::move(recovered); });
}

}  // namespace runband
