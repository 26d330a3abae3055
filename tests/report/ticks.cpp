// Ticks: round, inside, exact, enough; numbers as text.
#include <glint/core/error.h>
#include <glint/core/samples.h>
#include <glint/core/text.h>
#include <glint/report/axes.h>
#include <glint/report/font.h>
#include <glint/report/ticks.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <cmath>
#include <limits>
#include <set>
#include <string>

using namespace glint;

namespace {

/// What a label says, its signs read back.
double read(std::string label) {
    for (const auto& [from, to] : {std::pair<std::string, std::string>{"\u2212", "-"}, {"\u2009", ""}})
        for (std::size_t at = label.find(from); at != std::string::npos; at = label.find(from))
            label.replace(at, from.size(), to);
    const ParsedNumber number = parse_number(label);
    REQUIRE_MESSAGE(number.good, label);
    return number.value;
}

bool one_two_five(double step) {
    const double mantissa = step / std::pow(10, std::floor(std::log10(step) + 1e-9));
    return std::min({std::abs(mantissa - 1), std::abs(mantissa - 2), std::abs(mantissa - 5)}) < 1e-6;
}

}  // namespace

TEST_CASE("ticks of a plain range") {
    const Ticks ticks = round_ticks(0, 10, 5);
    CHECK(ticks.values == std::vector<double>{0, 2, 4, 6, 8, 10});
    CHECK(ticks.labels == std::vector<std::string>{"0", "2", "4", "6", "8", "10"});
    CHECK(round_ticks(-0.3, 0.3, 6).labels ==
          std::vector<std::string>{"−0.3", "−0.2", "−0.1", "0.0", "0.1", "0.2", "0.3"});
    CHECK(round_ticks(0, 30000, 3).labels ==
          std::vector<std::string>{"0", "10\u2009000", "20\u2009000", "30\u2009000"});
    CHECK(round_ticks(0, 3e-9, 3).labels == std::vector<std::string>{"0", "1", "2", "3"});
    CHECK(round_ticks(0, 3e-9, 3).exponent == -9);
}

TEST_CASE("ticks of any range are round, inside, exact and about as many as asked for") {
    RandomStream random(11);
    for (int i = 0; i < 20000; ++i) {
        const double size = std::pow(10, -12 + 24 * random.uniform());
        const double middle =
            i % 3 == 0 ? 0 : (random.uniform() - 0.5) * size * std::pow(10, 3 * random.uniform());
        const double low = middle - size * random.uniform(), high = middle + size * (0.01 + random.uniform());
        const int about = 1 + static_cast<int>(random.below(12));
        const Ticks ticks = round_ticks(low, high, about);
        CAPTURE(low);
        CAPTURE(high);
        CAPTURE(about);
        REQUIRE(ticks.values.size() == ticks.labels.size());
        const double slack = 1e-8 * (high - low);
        const std::set<std::string> distinct(ticks.labels.begin(), ticks.labels.end());
        CHECK(distinct.size() == ticks.labels.size());
        for (std::size_t k = 0; k < ticks.values.size(); ++k) {
            CHECK(ticks.values[k] >= low - slack);
            CHECK(ticks.values[k] <= high + slack);
            // The label is the value, not a rounded neighbour of it.
            CHECK(std::abs(read(ticks.labels[k]) * std::pow(10, ticks.exponent) - ticks.values[k]) < slack);
            if (k == 0) continue;
            const double step = ticks.values[k] - ticks.values[k - 1];
            CHECK(one_two_five(step));
            // Nearest of 1, 2, 5 on a logarithmic scale: off by the square root of 10/5 or 5/2 at most.
            CHECK(step < 1.6 * (high - low) / about);
            CHECK(step > (high - low) / about / 1.6);
        }
        CHECK(ticks.values.size() + 1 > (high - low) / (1.6 * (high - low) / about));
    }
}

TEST_CASE("ticks of decades") {
    const Ticks ticks = decade_ticks(1e-9, 1e2, 12);
    CHECK(ticks.values.size() == 12);
    CHECK(ticks.labels.front() == "10⁻⁹");
    CHECK(ticks.labels[9] == "1");
    CHECK(ticks.labels.back() == "10²");
    CHECK(decade_ticks(0.01, 100, 5).labels == std::vector<std::string>{"0.01", "0.1", "1", "10", "100"});
    CHECK(decade_ticks(1, 50, 6).labels == std::vector<std::string>{"1", "2", "5", "10", "20", "50"});
    // Less than a decade: as on a linear axis.
    CHECK(decade_ticks(2, 8, 3).values == round_ticks(2, 8, 3).values);
    // Many more decades than asked for: every n-th, the same ones whatever the range.
    for (const double value : decade_ticks(3e-29, 1e30, 6).values)
        CHECK(std::fmod(std::round(std::log10(value)), 10) == 0);
}

TEST_CASE("ticks of any decades are inside, ascending and labelled") {
    RandomStream random(12);
    for (int i = 0; i < 5000; ++i) {
        const double low = std::pow(10, -20 + 30 * random.uniform()),
                     high = low * std::pow(10, 0.01 + 12 * random.uniform());
        const Ticks ticks = decade_ticks(low, high, 1 + static_cast<int>(random.below(10)));
        CAPTURE(low);
        CAPTURE(high);
        CHECK(ticks.values.size() == ticks.labels.size());
        CHECK(std::is_sorted(ticks.values.begin(), ticks.values.end()));
        for (const double value : ticks.values)
            CHECK((value >= low * (1 - 1e-8) && value <= high * (1 + 1e-8)));
        for (const double value : ticks.minor)
            CHECK((value >= low * (1 - 1e-8) && value <= high * (1 + 1e-8)));
    }
}

TEST_CASE("a range that has no ticks is refused") {
    const double infinity = std::numeric_limits<double>::infinity(), nan = std::nan("");
    for (const auto& [low, high] : {std::pair{1.0, 1.0},
                                    {2.0, 1.0},
                                    {nan, 1.0},
                                    {0.0, nan},
                                    {0.0, infinity},
                                    {-infinity, 0.0},
                                    {1e17, 1e17 + 16},
                                    {-1e300, 1e300},
                                    {0.0, 1e-300}})
        CHECK_THROWS_AS(static_cast<void>(round_ticks(low, high, 5)), Error);
    CHECK_THROWS_AS(static_cast<void>(round_ticks(0, 1, 0)), Error);
    CHECK_THROWS_AS(static_cast<void>(decade_ticks(0, 1, 5)), Error);
    CHECK_THROWS_AS(static_cast<void>(decade_ticks(-1, 1, 5)), Error);
}

TEST_CASE("the numbers of a fitted axis stand clear of each other") {
    RandomStream random(13);
    for (int i = 0; i < 3000; ++i) {
        const bool logarithmic = i % 3 == 0, reversed = i % 2 == 0;
        const double low =
            logarithmic ? std::pow(10, -9 + 9 * random.uniform()) : (random.uniform() - 0.5) * 1e5;
        const double high = logarithmic ? low * std::pow(10, 0.1 + 8 * random.uniform())
                                        : low + std::pow(10, -2 + 7 * random.uniform());
        Axis axis{.label = "x",
                  .unit = "",
                  .range = {low, high},
                  .spacing = logarithmic ? Spacing::logarithmic : Spacing::linear};
        if (reversed) std::swap(axis.range.low, axis.range.high);
        const double length = 40 + 900 * random.uniform();
        const AxisRun run = i % 5 == 0 ? AxisRun::upward : AxisRun::across;
        const Ticks ticks = fitting_ticks(axis, length, run, 12);
        for (std::size_t k = 1; k < ticks.values.size(); ++k) {
            const double apart =
                std::abs(share_along(axis, ticks.values[k]) - share_along(axis, ticks.values[k - 1])) *
                length;
            const FontHeights heights = font_heights(12);
            const double need =
                run == AxisRun::across
                    ? (text_width(ticks.labels[k], 12) + text_width(ticks.labels[k - 1], 12)) / 2
                    : heights.ascent + heights.descent;
            CHECK(apart >= need + (run == AxisRun::across ? 10 : 5) - 1e-6);
        }
    }
}

TEST_CASE("numbers and labels as text") {
    CHECK(number_text(0) == "0");
    CHECK(number_text(-1.5) == "−1.5");
    CHECK(number_text(1234.6, 4) == "1235");
    CHECK(number_text(123456, 3) == "123\u2009000");
    CHECK(number_text(0.00123) == "0.00123");
    CHECK(number_text(1.2e-7) == "1.2 × 10⁻⁷");
    CHECK(number_text(9.996, 3) == "10");
    CHECK(number_text(std::nan("")) == "no value");
    CHECK(power_text(-12) == "10⁻¹²");
    CHECK(label_text("Energy", "J", -9) == "Energy (×\u200910⁻⁹ J)");
    CHECK(label_text("Energy", "J") == "Energy (J)");
    CHECK(label_text("Count", "") == "Count");
    CHECK(label_text("", "m") == "m");
}
