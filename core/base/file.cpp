#include "core/base/file.h"

#include <dlfcn.h>
#include <unistd.h>

#include <cerrno>
#include <cstdlib>
#include <cstring>
#include <fstream>
#include <sstream>

#include "core/base/error.h"

namespace runband {

namespace fs = std::filesystem;

std::string read_file(const fs::path& path) {
  std::error_code ignored;
  if (fs::is_directory(path, ignored))
    throw FileError(ErrorCode::file_unreadable, path.string() + ": is a folder, not a file.", "name a file in it.");
  errno = 0;
  std::ifstream stream(path, std::ios::binary);
  if (!stream) {
    throw FileError(ErrorCode::file_unreadable, path.string() + ": cannot be read: " + std::strerror(errno) + ".",
                    "check the path and its permissions.");
  }
  std::ostringstream bytes;
  bytes << stream.rdbuf();
  if (stream.bad())
    throw FileError(ErrorCode::file_unreadable, path.string() + ": reading failed midway.",
                    "check the disk or the network folder.");
  return std::move(bytes).str();
}

void write_file_by_path(const fs::path& path, const std::function<void(const fs::path&)>& write) {
  const auto refuse = [&](const std::string& why) {
    return FileError(ErrorCode::file_unwritable, path.string() + ": cannot be written: " + why + ".",
                     "choose another place with --out, or free the disk; nothing was changed.");
  };
  std::error_code problem;
  if (path.has_parent_path()) fs::create_directories(path.parent_path(), problem);
  if (problem) throw refuse(problem.message());
  if (fs::is_directory(path, problem)) throw refuse("it is a folder");
  fs::path temporary = path;
  temporary.replace_filename("." + path.stem().string() + "." + std::to_string(::getpid()) + ".part" +
                             path.extension().string());
  try {
    write(temporary);
  } catch (...) {
    fs::remove(temporary, problem);
    throw;
  }
  if (!fs::exists(temporary, problem)) throw refuse("no bytes arrived");
  fs::rename(temporary, path, problem);
  if (problem) {
    const std::string why = problem.message();
    fs::remove(temporary, problem);
    throw refuse(why);
  }
}

void write_file(const fs::path& path, const std::function<void(std::ostream&)>& write) {
  write_file_by_path(path, [&](const fs::path& temporary) {
    errno = 0;
    std::ofstream stream(temporary, std::ios::binary | std::ios::trunc);
    if (stream) write(stream);
    stream.flush();
    if (!stream) {
      throw FileError(
          ErrorCode::file_unwritable,
          path.string() + ": cannot be written: " + (errno != 0 ? std::strerror(errno) : "the disk refused") + ".",
          "choose another place with --out, or free the disk; nothing was changed.");
    }
  });
}

void write_file(const fs::path& path, const std::string& bytes) {
  write_file(path,
             [&](std::ostream& stream) { stream.write(bytes.data(), static_cast<std::streamsize>(bytes.size())); });
}

fs::path data_folder() {
  if (const char* named = std::getenv("RUNBAND_DATA"); named != nullptr && *named != '\0') return named;
  Dl_info info{};
  std::error_code ignored;
  if (::dladdr(reinterpret_cast<const void*>(&data_folder), &info) != 0 && info.dli_fname != nullptr) {
    const fs::path library = fs::weakly_canonical(info.dli_fname, ignored);
    for (fs::path folder = library.parent_path(); folder.has_relative_path(); folder = folder.parent_path()) {
      fs::path installed = folder / "share" / "runband";
      if (fs::is_directory(installed / "standards", ignored)) return installed;
    }
  }
  return RUNBAND_SOURCE_DATA;
}

}  // namespace runband
