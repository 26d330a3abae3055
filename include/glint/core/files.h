// Reading whole files, and writing a set of files that appears all at once or not at all.
#pragma once

#include <filesystem>
#include <string>
#include <string_view>
#include <vector>

namespace glint {

/// The whole file. Errors: missing file or a folder (input), unreadable or larger than `limit` bytes.
[[nodiscard]] std::string read_file(const std::filesystem::path& path, std::size_t limit = 256u << 20);

/// One file to be written.
struct OutputFile {
    std::string name;     ///< plain file name, no folders
    std::string content;  ///< bytes
};

/// Writes all files into `folder` (made when missing): each goes to a temporary name first and is renamed
/// when every one is whole on disk. On failure throws Error (Blame::machine) and leaves what was there
/// before.
void write_files(const std::filesystem::path& folder, const std::vector<OutputFile>& files);

/// Same promise for a single file given by its path.
void write_file(const std::filesystem::path& path, std::string_view content);

}  // namespace glint
