#include "core/profile/profile.h"

#include <algorithm>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/base/text.h"
#include "core/profile/checksum.h"
#include "core/profile/definition.h"

namespace runband {

namespace {

namespace fs = std::filesystem;

constexpr std::string_view kStandardPrefix = "standard:";

std::vector<fs::path> standard_files() {
  std::vector<fs::path> files;
  std::error_code failed;
  for (const auto& entry : fs::directory_iterator(data_folder() / "standards", failed))
    if (entry.path().extension() == ".toml") files.push_back(entry.path());
  std::sort(files.begin(), files.end());
  return files;
}

fs::path standard_file(const std::string& name) {
  std::vector<std::string> known;
  for (const fs::path& file : standard_files()) {
    known.push_back(file.stem().string());
    if (known.back() == name) return file;
  }
  const std::string near = nearest_name(name, known);
  throw InputError(ErrorCode::unknown_name, "standard:" + name + ": there is no such standard profile.",
                   (near.empty() ? "" : "did you mean 'standard:" + near + "'? ") + std::string("There are ") +
                       join_names(known) + ".");
}

std::shared_ptr<const Profile> load_definition(const fs::path& file, const std::string& origin, ProfileKind kind) {
  const std::string bytes = read_file(file);
  Profile profile = parse_definition(bytes, origin, kind);
  profile.checksum = checksum(bytes);
  if (profile.title.empty()) profile.title = file.stem().string();
  return std::make_shared<const Profile>(std::move(profile));
}

}  // namespace

std::shared_ptr<const Profile> load_profile(const std::string& spec, ProfileKind kind, const ProfileOptions&,
                                            const fs::path& base_folder) {
  if (spec.starts_with(kStandardPrefix))
    return load_definition(standard_file(spec.substr(kStandardPrefix.size())), spec, kind);
  const fs::path file = base_folder / spec;
  return load_definition(file, file.string(), kind);
}

std::vector<std::pair<std::string, std::string>> standard_profiles() {
  std::vector<std::pair<std::string, std::string>> names;
  for (const fs::path& file : standard_files()) {
    const std::string bytes = read_file(file);
    const bool wheel = bytes.find("\nkind = \"wheel\"") != std::string::npos;
    names.emplace_back(file.stem().string(),
                       parse_definition(bytes, file.string(), wheel ? ProfileKind::wheel : ProfileKind::rail).title);
  }
  return names;
}

}  // namespace runband
