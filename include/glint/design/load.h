// A design file into a Design, or every reason why not.
#pragma once

#include <glint/design/design.h>
#include <glint/design/record_file.h>
#include <filesystem>
#include <span>
#include <string>

namespace glint {

/// One "--set PATH=VALUE".
struct Setting {
    std::string path;
    std::string value;
};

/// "PATH=VALUE" as a Setting. Error when there is no "=" or no path.
[[nodiscard]] Setting parse_setting(const std::string& text);

/// A design with the places of its fields, so that later stages can say file and line.
struct LoadedDesign {
    Design design;
    Places places;
    std::filesystem::path folder;  ///< files named in the design are relative to this
};

/// Reads, sets, and checks a design. Throws Error with ALL problems.
[[nodiscard]] LoadedDesign load_design(const std::filesystem::path& file,
                                       std::span<const Setting> settings = {});

/// Fields that contradict each other although each is good alone. Paths are given, file and line are not.
[[nodiscard]] std::vector<Problem> contradictions(const Design&);

/// The design as XML that reads back equal.
[[nodiscard]] std::string write_design(const Design&);

}  // namespace glint
