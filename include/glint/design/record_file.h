// Records as XML text: read with every problem named, written so that it reads back equal, set by path.
#pragma once

#include <glint/core/error.h>
#include <glint/design/record.h>
#include <map>
#include <string>
#include <string_view>
#include <vector>

namespace glint {

/// Where each field and element of a file stands, by path such as "emitters/layout/pitch".
struct Places {
    std::string file;
    std::map<std::string, int, std::less<>> lines;  ///< elements and the fields that were given

    [[nodiscard]] bool given(std::string_view path) const { return lines.find(path) != lines.end(); }

    /// The problem with file and line filled in from its path: the line of the field, or of the nearest
    /// element around it.
    [[nodiscard]] Problem at(Problem problem) const;
};

/// What reading left behind. The target is only good when there are no problems.
struct ReadReport {
    Places places;
    std::vector<Problem> problems;
};

/// Reads XML text whose root is `record` into `target` (a fresh struct of the record's type). Unknown names,
/// repeated parts, stray text, bad values: all are reported, none stops the reading.
[[nodiscard]] ReadReport read_record(const Record& record, void* target, const std::string& xml,
                                     const std::string& file);

/// Sets one field by its path; `[2]` picks the second element of a kind: "optics/lens[2]/focal_length". An
/// empty text takes the field back, as if the file had not given it. The problem is returned, with path and
/// what is accepted, when it cannot be done.
[[nodiscard]] std::optional<Problem> set_field(const Record& record, void* target, Places& places,
                                               std::string_view path, std::string_view text);

/// Required fields that are missing, and given fields that do not apply to the choices made.
[[nodiscard]] std::vector<Problem> check_given(const Record& record, const void* target,
                                               const Places& places);

/// The whole record as XML: every field that applies and is set, in the order of the description.
[[nodiscard]] std::string write_record(const Record& record, const void* source);

}  // namespace glint
