// What can be set, printed from the records: for the terminal, for docs/, and as an XML Schema for editors.
#pragma once

#include <glint/design/record.h>
#include <string>
#include <string_view>

namespace glint {

/// All fields below `path` ("" for all), one a line, for a terminal. Error when there is no such element or
/// field.
[[nodiscard]] std::string reference_text(const Record& record, std::string_view path = "");

/// The field reference as Markdown, one table an element.
[[nodiscard]] std::string reference_markdown(const Record& record);

/// An XML Schema 1.0 for files whose root is `record`. Says which elements and fields exist, which units each
/// accepts and which names a choice has. Ranges, and what depends on another field (see When), it leaves to
/// the program.
[[nodiscard]] std::string xml_schema(const Record& record);

}  // namespace glint
