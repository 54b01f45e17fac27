// Files: read whole, write whole or not at all.
#pragma once

#include <filesystem>
#include <functional>
#include <iosfwd>
#include <string>

namespace runband {

/// The file's bytes. @throws FileError (file_unreadable) naming the path and the system's reason.
std::string read_file(const std::filesystem::path& path);

/// Writes through a temporary file in the same folder, flushes it and renames it over `path`; creates missing folders.
/// On any failure, also an exception from `write`, the temporary is removed and an existing file stays as it was.
/// @throws FileError (file_unwritable).
void write_file(const std::filesystem::path& path, const std::function<void(std::ostream&)>& write);
void write_file(const std::filesystem::path& path, const std::string& bytes);

/// For libraries that insist on a path of their own: calls `write(temporary path)` (same ending as `path`), then
/// renames.
void write_file_by_path(const std::filesystem::path& path,
                        const std::function<void(const std::filesystem::path&)>& write);

/// The folder with standards/, demo/ and tables/: $RUNBAND_DATA, else beside the installed library, else the source
/// tree's.
std::filesystem::path data_folder();

}  // namespace runband
