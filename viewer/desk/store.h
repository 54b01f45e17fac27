// What outlives the program: layout, recent files, and the cases that a crash would have lost.
#pragma once

#include <filesystem>
#include <optional>
#include <string>
#include <vector>

#include "viewer/desk/view.h"

namespace runband {

/// $XDG_STATE_HOME/runband, or ~/.local/state/runband.
std::filesystem::path state_folder();

class Store {
 public:
  /// Reads what is there; what cannot be read is as if it were not. An empty folder keeps nothing.
  explicit Store(std::filesystem::path folder);
  ~Store();
  Store(const Store&) = delete;
  Store& operator=(const Store&) = delete;

  Layout layout;
  const std::vector<std::string>& recent() const { return recent_; }
  void opened(const std::filesystem::path& file);
  /// Writes layout and recent files, quietly: a full disk must not stop anybody's work.
  void save() noexcept;

  /// Puts a case in safety. @param slot of the desk; @param file where it belongs, may be empty
  void keep(int slot, const std::string& case_text, const std::filesystem::path& folder,
            const std::filesystem::path& file) noexcept;
  void forget(int slot) noexcept;

  /// What another run of the program left behind without ending properly.
  struct Left {
    std::filesystem::path kept;
    std::string case_text;
    std::filesystem::path folder, file;
    std::string when;
  };
  std::vector<Left> left_behind() const;
  void discard(const Left&) noexcept;

 private:
  std::filesystem::path kept_file(int slot) const;
  std::filesystem::path folder_;
  std::vector<std::string> recent_;
};

}  // namespace runband
