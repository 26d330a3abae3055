// Looking over the text of an OBJ file for what its parser would pass over or guess at.
#include "obj_scan.h"

#include <glint/core/text.h>

#include <algorithm>
#include <array>
#include <charconv>
#include <cstdint>
#include <string_view>

namespace glint {
namespace {

constexpr std::size_t most_problems = 20;  // a file that is no OBJ at all has one on every line
constexpr std::size_t most_corners = 255;  // the parser counts corners in one byte

// Statements without effect on the shape of polygons.
constexpr std::array<std::string_view, 17> passed_over = {
    "vt",     "vn",     "vp",     "p",      "l",   "g",     "o",        "s",       "mg",
    "usemtl", "mtllib", "usemap", "maplib", "lod", "bevel", "c_interp", "d_interp"};

std::vector<std::string_view> words_of(std::string_view line) {
    constexpr std::string_view blanks = " \t";
    std::vector<std::string_view> words;
    for (std::size_t at = line.find_first_not_of(blanks); at != line.npos;) {
        const std::size_t end = std::min(line.find_first_of(blanks, at), line.size());
        words.push_back(line.substr(at, end - at));
        at = line.find_first_not_of(blanks, end);
    }
    return words;
}

// Text of unknown origin for a message: short and printable.
std::string shown(std::string_view word) {
    std::string text(word.substr(0, 24));
    for (char& c : text)
        if (c < ' ' || c > '~') c = '?';
    return "'" + text + (word.size() > 24 ? "..." : "") + "'";
}

struct WholeNumber {
    std::int64_t value = 0;
    bool good = false;
};

WholeNumber whole_number(std::string_view text) {
    WholeNumber number;
    const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), number.value);
    number.good = error == std::errc{} && end == text.data() + text.size() && number.value != 0;
    return number;
}

class Scan {
public:
    explicit Scan(const std::filesystem::path& path) : file_(path.string()) {}

    void line(std::string_view text) {
        ++line_;
        const std::vector<std::string_view> words = words_of(text);
        if (words.empty()) return;
        if (words[0] == "v")
            vertex(words);
        else if (words[0] == "f")
            face(words);
        else if (std::find(passed_over.begin(), passed_over.end(), words[0]) == passed_over.end())
            add(line_, "unknown or unsupported statement " + shown(words[0]),
                "vertices and polygons of a Wavefront OBJ file");
    }

    std::vector<Problem> end() {
        for (const auto& [number, line] : ahead_)
            if (number > vertices_) missing(number, line);
        if (faces_ == 0 && problems_.empty()) add(0, "there are no triangles", "at least one face");
        return std::move(problems_);
    }

private:
    struct Reference {
        std::int64_t number = 0;
        int line = 0;
    };

    void add(int line, std::string what, std::string accepted) {
        if (problems_.size() > most_problems) return;
        if (problems_.size() == most_problems) what = "there are more problems after these", accepted = {};
        problems_.push_back({.what = std::move(what),
                             .accepted = std::move(accepted),
                             .path = {},
                             .file = file_,
                             .line = line});
    }

    void missing(std::int64_t number, int line) {
        add(line, "vertex " + std::to_string(number) + " does not exist",
            "1 to " + std::to_string(vertices_) + ", or -1 back to the first");
    }

    void vertex(const std::vector<std::string_view>& words) {
        ++vertices_;
        if (words.size() < 4 || words.size() > 8)
            add(line_, "a vertex of " + std::to_string(words.size() - 1) + " numbers", "x y z");
        for (std::size_t i = 1; i < words.size(); ++i)
            if (!parse_number(words[i]).good)
                add(line_, shown(words[i]) + " is not a finite number", "a number like -1.25e-3");
    }

    void face(const std::vector<std::string_view>& words) {
        ++faces_;
        if (words.size() < 4 || words.size() > most_corners + 1)
            add(line_, "a face of " + std::to_string(words.size() - 1) + " corners",
                "3 to " + std::to_string(most_corners));
        for (std::size_t i = 1; i < words.size(); ++i) corner(words[i]);
    }

    // v, v/vt, v//vn or v/vt/vn
    void corner(std::string_view word) {
        const std::vector<std::string_view> parts = split(word, '/');
        const WholeNumber vertex = whole_number(parts[0]);
        bool good = vertex.good && parts.size() <= 3;
        for (std::size_t i = 1; i < parts.size(); ++i)
            good = good && (whole_number(parts[i]).good || (parts[i].empty() && i == 1 && parts.size() == 3));
        if (!good) return add(line_, shown(word) + " is not a corner of a face", "v, v/t, v//n or v/t/n");
        if (vertex.value < -vertices_) missing(vertex.value, line_);
        if (vertex.value > vertices_) ahead_.push_back({vertex.value, line_});
    }

    std::string file_;
    int line_ = 0;
    std::int64_t vertices_ = 0;
    std::int64_t faces_ = 0;
    std::vector<Reference> ahead_;  // numbers above the vertices so far, to be judged at the end
    std::vector<Problem> problems_;
};

}  // namespace

std::string plain_lines(std::string text) {
    bool comment = false;
    for (std::size_t i = 0; i < text.size(); ++i) {
        char& c = text[i];
        if (c == '\r') c = i + 1 < text.size() && text[i + 1] == '\n' ? ' ' : '\n';
        if (c == '\n') comment = false;
        if (c == '#') comment = true;
        if (comment) c = ' ';
    }
    return text;
}

std::vector<Problem> obj_problems(const std::string& text, const std::filesystem::path& path) {
    Scan scan(path);
    for (std::size_t start = 0; start < text.size();) {
        const std::size_t end = std::min(text.find('\n', start), text.size());
        scan.line(std::string_view(text).substr(start, end - start));
        start = end + 1;
    }
    return scan.end();
}

}  // namespace glint
