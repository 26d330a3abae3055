// Small text helpers for messages.
#include <glint/core/text.h>

#include <algorithm>
#include <charconv>
#include <cmath>

namespace glint {

int edit_distance(std::string_view a, std::string_view b) {
    // Damerau-Levenshtein with adjacent swaps (optimal string alignment), three rows.
    const auto width = b.size() + 1;
    std::vector<int> before(width), above(width), row(width);
    for (std::size_t j = 0; j < width; ++j) above[j] = static_cast<int>(j);
    for (std::size_t i = 1; i <= a.size(); ++i) {
        row[0] = static_cast<int>(i);
        for (std::size_t j = 1; j < width; ++j) {
            const int replace = above[j - 1] + (a[i - 1] == b[j - 1] ? 0 : 1);
            row[j] = std::min({replace, above[j] + 1, row[j - 1] + 1});
            if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1])
                row[j] = std::min(row[j], before[j - 2] + 1);
        }
        before.swap(above);
        above.swap(row);
    }
    return above[b.size()];
}

std::string nearest_name(std::string_view word, std::span<const std::string> names) {
    std::string nearest;
    int least = 1 << 20;
    for (const std::string& name : names) {
        const int distance = edit_distance(word, name);
        const int allowed = static_cast<int>(std::max(word.size(), name.size())) / 3 + 1;
        if (distance <= allowed && distance < least) least = distance, nearest = name;
    }
    return nearest;
}

std::string join_or(std::span<const std::string> words) {
    std::string text;
    for (std::size_t i = 0; i < words.size(); ++i) {
        if (i > 0) text += i + 1 == words.size() ? " or " : ", ";
        text += words[i];
    }
    return text;
}

std::string counted(long count, std::string_view noun) {
    return std::to_string(count) + " " + std::string(noun) + (count == 1 ? "" : "s");
}

std::string wrapped(std::string_view text, std::size_t width, std::size_t indent) {
    const std::string margin(indent, ' ');
    std::string out = margin;
    std::size_t column = indent;
    for (const std::string_view word : split(text, ' ')) {
        if (column > indent && column + 1 + word.size() > width) out += "\n" + margin, column = indent;
        if (column > indent) out += ' ', ++column;
        out += word;
        column += word.size();
    }
    return out + "\n";
}

std::string_view trim(std::string_view text) {
    constexpr std::string_view blank = " \t\r\n";
    const auto first = text.find_first_not_of(blank);
    if (first == std::string_view::npos) return {};
    return text.substr(first, text.find_last_not_of(blank) - first + 1);
}

std::vector<std::string_view> split(std::string_view text, char separator) {
    std::vector<std::string_view> pieces;
    for (;;) {
        const auto end = text.find(separator);
        pieces.push_back(trim(text.substr(0, end)));
        if (end == std::string_view::npos) return pieces;
        text.remove_prefix(end + 1);
    }
}

ParsedNumber parse_number(std::string_view text) {
    text = trim(text);
    if (text.starts_with('+')) text.remove_prefix(1);
    double value = 0;
    const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
    const bool good = error == std::errc{} && end == text.data() + text.size() && std::isfinite(value);
    return {good ? value : 0, good};
}

}  // namespace glint
