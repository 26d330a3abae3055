// Small text helpers for messages.
#pragma once

#include <concepts>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace glint {

/// Edits (insert, delete, replace, swap of neighbours) that turn one word into the other.
[[nodiscard]] int edit_distance(std::string_view a, std::string_view b);

/// The known name closest to `word`, or "" when none is close enough to be a likely slip
/// (more than a third of its letters would have to change).
[[nodiscard]] std::string nearest_name(std::string_view word, std::span<const std::string> names);

/// "a, b or c".
[[nodiscard]] std::string join_or(std::span<const std::string> words);

/// "1 zone", "3 zones".
[[nodiscard]] std::string counted(long count, std::string_view noun);

/// Text broken at blanks so that no line is wider than `width`, every line indented; ends with a line break.
[[nodiscard]] std::string wrapped(std::string_view text, std::size_t width, std::size_t indent = 0);

/// Pieces of `text` between separators, blanks trimmed; empty pieces are kept.
[[nodiscard]] std::vector<std::string_view> split(std::string_view text, char separator);
template <std::same_as<std::string> Temporary>
void split(Temporary&& text, char separator) = delete;  // the pieces would dangle

[[nodiscard]] std::string_view trim(std::string_view text);

/// A finite number in plain decimal notation that fills the whole text (blanks aside); false otherwise.
/// Decimal point only, whatever the locale.
struct ParsedNumber {
    double value = 0;
    bool good = false;
};
[[nodiscard]] ParsedNumber parse_number(std::string_view text);

}  // namespace glint
