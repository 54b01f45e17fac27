#include "viewer/desk/store.h"

#include <signal.h>
#include <unistd.h>

#include <algorithm>
#include <chrono>
#include <cstdlib>
#include <ctime>
#include <nlohmann/json.hpp>

#include "core/base/file.h"

namespace runband {

namespace {

using nlohmann::json;
constexpr std::size_t kMostRecent = 12;

bool alive(long process) { return process > 0 && (::kill(static_cast<pid_t>(process), 0) == 0 || errno == EPERM); }

std::string time_text(const std::filesystem::path& file) {
  std::error_code none;
  const auto time = std::filesystem::last_write_time(file, none);
  if (none) return "";
  const auto system = std::chrono::file_clock::to_sys(time);
  const std::time_t seconds =
      std::chrono::system_clock::to_time_t(std::chrono::time_point_cast<std::chrono::system_clock::duration>(system));
  char words[64];
  std::tm local{};
  localtime_r(&seconds, &local);
  return std::strftime(words, sizeof words, "%Y-%m-%d %H:%M", &local) > 0 ? words : "";
}

}  // namespace

std::filesystem::path state_folder() {
  if (const char* given = std::getenv("XDG_STATE_HOME"); given != nullptr && *given != '\0')
    return std::filesystem::path(given) / "runband";
  if (const char* home = std::getenv("HOME"); home != nullptr && *home != '\0')
    return std::filesystem::path(home) / ".local" / "state" / "runband";
  return {};
}

Store::Store(std::filesystem::path folder) : folder_(std::move(folder)) {
  if (folder_.empty()) return;
  try {
    const json j = json::parse(read_file(folder_ / "window.json"));
    layout.left = std::clamp(j.value("left", layout.left), 200.0, 600.0);
    layout.right = std::clamp(j.value("right", layout.right), 200.0, 700.0);
    layout.strip = std::clamp(j.value("strip", layout.strip), 110.0, 700.0);
    layout.theme = plot::theme_named(j.value("theme", "light")).value_or(plot::ThemeName::light);
    if (layout.theme == plot::ThemeName::paper) layout.theme = plot::ThemeName::light;
    layout.text_scale = std::clamp(j.value("text_scale", 1.0), 0.75, 2.0);
    layout.width = std::clamp(j.value("width", layout.width), 640, 16000);
    layout.height = std::clamp(j.value("height", layout.height), 480, 16000);
    layout.show_left = j.value("show_left", true);
    layout.show_right = j.value("show_right", true);
    layout.show_strip = j.value("show_strip", true);
    for (const auto& file : j.value("recent", json::array()))
      if (file.is_string() && recent_.size() < kMostRecent) recent_.push_back(file);
  } catch (const std::exception&) {
    // A first start, or a file of another time: begin with the ordinary layout.
  }
}

Store::~Store() { save(); }

void Store::opened(const std::filesystem::path& file) {
  const std::string whole = std::filesystem::absolute(file).lexically_normal().string();
  std::erase(recent_, whole);
  recent_.insert(recent_.begin(), whole);
  if (recent_.size() > kMostRecent) recent_.resize(kMostRecent);
  save();
}

void Store::save() noexcept {
  if (folder_.empty()) return;
  try {
    std::filesystem::create_directories(folder_);
    const json j{{"left", layout.left},
                 {"right", layout.right},
                 {"strip", layout.strip},
                 {"theme", plot::theme_name(layout.theme)},
                 {"text_scale", layout.text_scale},
                 {"width", layout.width},
                 {"height", layout.height},
                 {"show_left", layout.show_left},
                 {"show_right", layout.show_right},
                 {"show_strip", layout.show_strip},
                 {"recent", recent_}};
    write_file(folder_ / "window.json", j.dump(2) + "\n");
  } catch (const std::exception&) {
  }
}

std::filesystem::path Store::kept_file(int slot) const {
  return folder_ / "kept" / (std::to_string(::getpid()) + "-" + std::to_string(slot) + ".json");
}

void Store::keep(int slot, const std::string& case_text, const std::filesystem::path& folder,
                 const std::filesystem::path& file) noexcept {
  if (folder_.empty()) return;
  try {
    std::filesystem::create_directories(folder_ / "kept");
    const json j{{"case", case_text}, {"folder", folder.string()}, {"file", file.string()}};
    write_file(kept_file(slot), j.dump() + "\n");
  } catch (const std::exception&) {
  }
}

void Store::forget(int slot) noexcept {
  if (folder_.empty()) return;
  std::error_code none;
  std::filesystem::remove(kept_file(slot), none);
}

std::vector<Store::Left> Store::left_behind() const {
  std::vector<Left> found;
  if (folder_.empty()) return found;
  std::error_code none;
  for (const auto& entry : std::filesystem::directory_iterator(folder_ / "kept", none)) {
    const std::string name = entry.path().filename().string();
    if (!name.ends_with(".json") || alive(std::atol(name.c_str()))) continue;
    try {
      const json j = json::parse(read_file(entry.path()));
      found.push_back({entry.path(), j.at("case"), std::filesystem::path(j.at("folder").get<std::string>()),
                       std::filesystem::path(j.at("file").get<std::string>()), time_text(entry.path())});
    } catch (const std::exception&) {
      // Not readable: nothing to offer, and nothing of anybody's is thrown away.
    }
  }
  std::sort(found.begin(), found.end(), [](const Left& a, const Left& b) { return a.when > b.when; });
  return found;
}

void Store::discard(const Left& left) noexcept {
  std::error_code none;
  std::filesystem::remove(left.kept, none);
}

}  // namespace runband
