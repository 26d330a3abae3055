// Letters: widths, breaking, and that drawn ink stays in the box that layout counts with.
#include <glint/core/samples.h>
#include <glint/report/canvas.h>
#include <glint/report/font.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <cmath>

using namespace glint;

namespace {

/// The box of everything darker than the page, in units.
PageBox ink_box(const Canvas& canvas) {
    PageBox box{1e9, 1e9, -1e9, -1e9};
    for (int row = 0; row < canvas.pixel_height(); ++row)
        for (int column = 0; column < canvas.pixel_width(); ++column) {
            if (canvas.pixels()[(static_cast<std::size_t>(row) * canvas.pixel_width() + column) * 3] > 200)
                continue;
            const double x = column / canvas.density(), y = row / canvas.density(),
                         size = 1 / canvas.density();
            box = {std::min(box.left, x), std::min(box.top, y), std::max(box.right, x + size),
                   std::max(box.bottom, y + size)};
        }
    return box;
}

double ink(const Canvas& canvas) {
    double sum = 0;
    for (const std::uint8_t part : canvas.pixels()) sum += 255 - part;
    return sum;
}

}  // namespace

TEST_CASE("widths: digits are equal, pairs are kerned, weights differ, size scales") {
    for (const Weight weight : {Weight::regular, Weight::semibold})
        for (const char* digit : {"1", "2", "3", "4", "5", "6", "7", "8", "9"})
            CHECK(text_width(digit, 12, weight) == text_width("0", 12, weight));
    CHECK(text_width("AV", 12) < text_width("A", 12) + text_width("V", 12) - 0.2);
    CHECK(text_width("Range", 12, Weight::semibold) > text_width("Range", 12));
    CHECK(text_width("Range (m)", 24) == doctest::Approx(2 * text_width("Range (m)", 12)));
    CHECK(text_width("", 12) == 0);
}

TEST_CASE("every sign that is printed has a shape of its own") {
    const TextOutline unknown = text_outline("\uFFFD", 20, Weight::regular, 0.1);
    CHECK_FALSE(unknown.rings.empty());
    for (const char* sign : {"µ", "°", "±", "×", "·", "–", "—", "≤", "≥", "≈", "≠", "Ω", "α", "β",
                             "λ", "μ", "σ", "τ", "φ", "²", "³", "→", "←", "↑", "↓", "−", "…", "⁻",
                             "⁰", "⁴", "⁹", "₀", "₉", "∞", "√", "Δ", "‰", "é", "ü", "ß"}) {
        const TextOutline outline = text_outline(sign, 20, Weight::regular, 0.1);
        CHECK_MESSAGE(!outline.rings.empty(), sign);
        const bool same = outline.rings.size() == unknown.rings.size() &&
                          outline.rings[0].size() == unknown.rings[0].size() &&
                          outline.rings[0][0] == unknown.rings[0][0];
        CHECK_MESSAGE(!same, sign);
    }
    CHECK(text_width("⁵", 12) < 0.75 * text_width("5", 12));
}

TEST_CASE("bytes that are no UTF-8 show as boxes and nothing else happens") {
    for (const char* text : {"\xFF", "\xC3", "a\xE2\x88", "\x80z", "\xF0\x9F\x98\x80", "\xC3\x28"}) {
        CHECK(text_width(text, 12) > 0);
        CHECK_FALSE(text_outline(text, 12, Weight::regular, 0.1).rings.empty());
    }
}

TEST_CASE("wrapped lines fit, and lose no word") {
    RandomStream random(31);
    for (int i = 0; i < 300; ++i) {
        std::string text;
        for (std::uint64_t word = random.below(12) + 1; word > 0; --word) {
            for (std::uint64_t letter = random.below(random.below(9) == 0 ? 40 : 9) + 1; letter > 0; --letter)
                text += random.below(9) == 0 ? std::string("µ")
                                             : std::string(1, static_cast<char>('a' + random.below(26)));
            text += word > 1 ? " " : "";
        }
        const double width = 30 + 150 * random.uniform();
        const std::vector<std::string> lines = wrap_text(text, width, 12, Weight::regular);
        std::string joined;
        for (const std::string& line : lines) {
            CHECK(text_width(line, 12) <= width);
            joined += line;
        }
        std::erase(text, ' ');
        std::erase(joined, ' ');
        CHECK(joined == text);
    }
    CHECK(wrap_text("", 100, 12, Weight::regular) == std::vector<std::string>{""});
    CHECK(wrap_text("one two", 1000, 12, Weight::regular) == std::vector<std::string>{"one two"});
}

TEST_CASE("drawn letters stay in the box that the canvas records") {
    for (const char* text : {"Hxgpqyj", "Range (m)", "10⁻⁹", "W/m²", "|[{@}]|", "0123456789", "→ R₀"})
        for (const Reading reading : {Reading::across, Reading::upward})
            for (const Align align : {Align::left, Align::centre, Align::right})
                for (const Anchor anchor : {Anchor::baseline, Anchor::middle}) {
                    Canvas canvas(300, 300);
                    const TextStyle style{.size = 20, .align = align, .anchor = anchor, .reading = reading};
                    canvas.text({150, 150}, text, style);
                    REQUIRE(canvas.labels().size() == 1);
                    CHECK(canvas.labels()[0].text == text);
                    // Brackets and the tail of j reach a little beyond ascent, descent and pen; rounding of
                    // the baseline adds half a pixel.
                    const PageBox box = canvas.labels()[0].box;
                    CHECK_MESSAGE(box.grown(2.2).holds(ink_box(canvas)), text);
                    CHECK(box.overlaps(ink_box(canvas)));
                }
}

TEST_CASE("alignment and anchor put the box where they say") {
    const TextStyle left{.size = 20, .align = Align::left}, right{.size = 20, .align = Align::right},
        centre{.size = 20, .align = Align::centre, .anchor = Anchor::middle};
    CHECK(text_box({50, 60}, "abc", left).left == 50);
    CHECK(text_box({50, 60}, "abc", right).right == 50);
    CHECK((text_box({50, 60}, "abc", centre).left + text_box({50, 60}, "abc", centre).right) / 2 ==
          doctest::Approx(50));
    Canvas canvas(100, 100);
    canvas.text({50, 60}, "H", centre);
    // Half the height of a capital on the point, to a pixel.
    CHECK(std::abs(ink_box(canvas).centre().y() - 60) < 0.6);
    CHECK(std::abs(ink_box(canvas).centre().x() - 50) < 0.6);
    // H has the same air on both sides.
    Canvas first(100, 100), last(100, 100);
    first.text({50, 60}, "H", left);
    last.text({50, 60}, "H", right);
    CHECK(std::abs((ink_box(first).left - 50) - (50 - ink_box(last).right)) < 0.6);
}

TEST_CASE("upward text is the same text turned") {
    Canvas across(200, 60), upward(60, 200);
    across.text({20, 40}, "Range (m)", {.size = 22});
    upward.text({40, 180}, "Range (m)", {.size = 22, .reading = Reading::upward});
    REQUIRE(across.pixel_width() == upward.pixel_height());
    int differing = 0;
    for (int row = 0; row < across.pixel_height(); ++row)
        for (int column = 0; column < across.pixel_width(); ++column) {
            const int a =
                across.pixels()[(static_cast<std::size_t>(row) * across.pixel_width() + column) * 3];
            const int b = upward.pixels()[(static_cast<std::size_t>(upward.pixel_height() - 1 - column) *
                                               upward.pixel_width() +
                                           row) *
                                          3];
            differing += std::abs(a - b) > 2;
        }
    CHECK(differing == 0);
    CHECK(ink(across) > 0);
}
