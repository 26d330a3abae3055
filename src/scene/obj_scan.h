// Looking over the text of an OBJ file for what its parser would pass over or guess at.
#pragma once

#include <glint/core/error.h>

#include <cstddef>
#include <filesystem>
#include <string>
#include <vector>

namespace glint {

/// The text with every comment blanked and every line end made '\n'; the number of lines stays.
[[nodiscard]] std::string plain_lines(std::string text);

/// Everything that is wrong in plain lines of an OBJ file (at most some twenty problems; the last then says
/// that there are more): coordinates that are no finite numbers, faces of fewer than 3 or more than 255
/// corners, vertex numbers that do not exist, statements that are unknown or describe curves.
[[nodiscard]] std::vector<Problem> obj_problems(const std::string& text, const std::filesystem::path& path);

}  // namespace glint
