// Text as widths and outlines: UTF-8, kerning, raised and lowered digits, arrows.
#include <glint/report/font.h>

#include "report/fonts/embedded.h"

#include <stb/stb_truetype.h>
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <memory>

namespace glint {

namespace {

/// One thing to set: a character of the font, or an arrow that is drawn.
struct Piece {
    char32_t character = 0;
    double scale = 1;        ///< against the size of the text
    double raise = 0;        ///< em of the text
    int quarter_turns = -1;  ///< arrows: 0 right, 1 up, 2 left, 3 down; -1: not an arrow
};

stbtt_fontinfo open_font(Weight weight) {
    const std::span<const unsigned char> bytes =
        weight == Weight::regular ? embedded::open_sans_regular : embedded::open_sans_semibold;
    stbtt_fontinfo font{};
    stbtt_InitFont(&font, bytes.data(), 0);
    return font;
}

/// Characters of UTF-8 text; a byte that does not belong becomes U+FFFD.
std::vector<char32_t> characters_of(std::string_view text) {
    std::vector<char32_t> characters;
    for (std::size_t i = 0; i < text.size();) {
        const auto lead = static_cast<unsigned char>(text[i]);
        const std::size_t length = lead < 0x80       ? 1
                                   : lead >> 5 == 6  ? 2
                                   : lead >> 4 == 14 ? 3
                                   : lead >> 3 == 30 ? 4
                                                     : 0;
        char32_t character = length == 1 ? lead : lead & (0x7Fu >> length);
        bool good = length > 0 && i + length <= text.size();
        for (std::size_t k = 1; good && k < length; ++k) {
            const auto next = static_cast<unsigned char>(text[i + k]);
            good = next >> 6 == 2;
            character = character << 6 | (next & 0x3Fu);
        }
        characters.push_back(good ? character : U'\uFFFD');
        i += good ? length : 1;
    }
    return characters;
}

Piece piece_of(char32_t character) {
    constexpr std::u32string_view raised = U"⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻⁼⁽⁾", lowered = U"₀₁₂₃₄₅₆₇₈₉₊₋₌₍₎",
                                  plain = U"0123456789+−=()", arrows = U"→↑←↓";
    if (const auto at = raised.find(character); at != raised.npos)
        return {.character = plain[at], .scale = 0.66, .raise = 0.31};
    if (const auto at = lowered.find(character); at != lowered.npos)
        return {.character = plain[at], .scale = 0.66, .raise = -0.14};
    if (const auto at = arrows.find(character); at != arrows.npos)
        return {.character = character, .quarter_turns = static_cast<int>(at)};
    if (character < 0x20 || character == 0x7F) return {.character = U' '};
    return {.character = character};
}

/// An arrow in em, y down, one em wide, its shaft at half the height of a capital.
std::vector<Vec2> arrow_ring(int quarter_turns, const Vec2& pen, double size) {
    constexpr double shaft = 0.036, barb = 0.19, head = 0.24, half = 0.40;
    const std::array<Vec2, 7> right{Vec2{-half, -shaft}, Vec2{half - head, -shaft}, Vec2{half - head, -barb},
                                    Vec2{half, 0},       Vec2{half - head, barb},   Vec2{half - head, shaft},
                                    Vec2{-half, shaft}};
    std::vector<Vec2> ring;
    for (Vec2 corner : right) {
        for (int turn = 0; turn < quarter_turns; ++turn) corner = Vec2{corner.y(), -corner.x()};
        ring.push_back(pen + size * (corner + Vec2{0.5, -0.357}));
    }
    return ring;
}

/// Appends the outlines of one glyph; `scale` turns font units into page units.
void append_glyph(std::vector<std::vector<Vec2>>& rings, const stbtt_fontinfo& font, int glyph,
                  const Vec2& pen, double scale, double tolerance) {
    stbtt_vertex* shape = nullptr;
    const int count = stbtt_GetGlyphShape(&font, glyph, &shape);
    const auto release = [&font](stbtt_vertex* vertices) { stbtt_FreeShape(&font, vertices); };
    const std::unique_ptr<stbtt_vertex, decltype(release)> owner(shape, release);
    const auto place = [&](double x, double y) -> Vec2 { return pen + scale * Vec2{x, -y}; };
    for (int i = 0; i < count; ++i) {
        const stbtt_vertex& vertex = shape[i];
        const Vec2 end = place(vertex.x, vertex.y);
        if (vertex.type == STBTT_vmove) rings.emplace_back();
        if (vertex.type == STBTT_vcurve) {
            // A parabola cut into n equal parts strays from its chords by |from - 2 control + end| / (4 n^2).
            const Vec2 from = rings.back().back(), control = place(vertex.cx, vertex.cy);
            const double bend = (from - 2 * control + end).norm();
            const int parts =
                std::clamp(static_cast<int>(std::ceil(std::sqrt(bend / (4 * tolerance)))), 1, 64);
            for (int k = 1; k < parts; ++k) {
                const double t = static_cast<double>(k) / parts;
                rings.back().push_back((1 - t) * (1 - t) * from + 2 * t * (1 - t) * control + t * t * end);
            }
        }
        rings.back().push_back(end);
    }
}

/// Walks the pen along the text; `visit(piece, glyph, pen x in em)` sees each piece.
template <class Visit>
double walk(const stbtt_fontinfo& font, std::string_view text, Visit&& visit) {
    const double em = stbtt_ScaleForMappingEmToPixels(&font, 1);
    double pen = 0;
    int previous = -1;
    for (const char32_t character : characters_of(text)) {
        const Piece piece = piece_of(character);
        if (piece.quarter_turns >= 0) {
            visit(piece, 0, pen);
            pen += 1;
            previous = -1;
            continue;
        }
        const int glyph = stbtt_FindGlyphIndex(&font, static_cast<int>(piece.character));
        const bool kerned = previous >= 0 && piece.scale == 1;
        if (kerned) pen += stbtt_GetGlyphKernAdvance(&font, previous, glyph) * em;
        int advance = 0, bearing = 0;
        stbtt_GetGlyphHMetrics(&font, glyph, &advance, &bearing);
        visit(piece, glyph, pen);
        pen += advance * em * piece.scale;
        previous = piece.scale == 1 ? glyph : -1;
    }
    return pen;
}

/// Bytes of the longest start of `text` (at least one character) that is no wider than `width`.
std::size_t fitting_bytes(std::string_view text, double width, double size, Weight weight) {
    std::size_t fitting = 0;
    for (std::size_t end = 1; end <= text.size(); ++end) {
        if (end < text.size() && static_cast<unsigned char>(text[end]) >> 6 == 2) continue;
        if (fitting > 0 && text_width(text.substr(0, end), size, weight) > width) break;
        fitting = end;
    }
    return fitting;
}

}  // namespace

double text_width(std::string_view text, double size, Weight weight) {
    return size * walk(open_font(weight), text, [](const Piece&, int, double) {});
}

TextOutline text_outline(std::string_view text, double size, Weight weight, double tolerance) {
    const stbtt_fontinfo font = open_font(weight);
    const double em = stbtt_ScaleForMappingEmToPixels(&font, 1);
    TextOutline outline;
    outline.width = size * walk(font, text, [&](const Piece& piece, int glyph, double x) {
                        const Vec2 pen = size * Vec2{x, -piece.raise};
                        if (piece.quarter_turns >= 0)
                            outline.rings.push_back(arrow_ring(piece.quarter_turns, pen, size));
                        else
                            append_glyph(outline.rings, font, glyph, pen, size * em * piece.scale, tolerance);
                    });
    return outline;
}

FontHeights font_heights(double size) {
    const stbtt_fontinfo font = open_font(Weight::regular);
    const double scale = stbtt_ScaleForMappingEmToPixels(&font, static_cast<float>(size));
    const auto extent = [&](char32_t character) {
        int left = 0, bottom = 0, right = 0, top = 0;
        stbtt_GetCodepointBox(&font, static_cast<int>(character), &left, &bottom, &right, &top);
        return std::pair{scale * bottom, scale * top};
    };
    return {.capital = extent(U'H').second,
            .ascent = extent(U'd').second,
            .descent = -extent(U'g').first,
            .line = 1.3 * size};
}

std::vector<std::string> wrap_text(std::string_view text, double width, double size, Weight weight) {
    std::vector<std::string> lines(1);
    for (std::size_t i = 0; i < text.size();) {
        const std::size_t blank = std::min(text.find(' ', i), text.size());
        std::string_view word = text.substr(i, blank - i);
        i = blank + 1;
        const std::string joined =
            lines.back().empty() ? std::string(word) : lines.back() + " " + std::string(word);
        if (text_width(joined, size, weight) <= width) {
            lines.back() = joined;
            continue;
        }
        if (!lines.back().empty()) lines.emplace_back();
        while (text_width(word, size, weight) > width) {
            const std::size_t bytes = fitting_bytes(word, width, size, weight);
            if (bytes == word.size()) break;
            lines.back() = word.substr(0, bytes);
            lines.emplace_back();
            word.remove_prefix(bytes);
        }
        lines.back() = word;
    }
    return lines;
}

}  // namespace glint
