// Pictures of the chip: what they say and show, and that their texts keep clear of each other.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/report/chip_pictures.h>
#include <glint/report/png.h>

#include <doctest/doctest.h>
#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <set>

using namespace glint;

namespace {

Design design_of(LayoutKind kind, int rows, int columns, const Addressing& addressing) {
    Design design;
    design.emitters.aperture = 8e-6;
    design.emitters.layout = {.kind = kind, .rows = rows, .columns = columns, .pitch = 40e-6};
    design.emitters.addressing = addressing;
    design.drive = {.peak_power = 0.1, .pulse_width = 3e-9};
    design.firing = {.zones_at_once = 1, .shots = 10, .repetition = 1e6, .gap = 5e-6};
    return design;
}

Design blocks_design() {
    return design_of(LayoutKind::grid, 8, 12, {.scheme = AddressingScheme::blocks, .rows = 2, .columns = 3});
}

std::vector<Design> every_design() {
    std::vector<Design> designs{
        blocks_design(),
        design_of(LayoutKind::hexagonal, 16, 24,
                  {.scheme = AddressingScheme::blocks, .rows = 2, .columns = 4}),
        design_of(LayoutKind::grid, 8, 8, {.scheme = AddressingScheme::interleaved, .rows = 2, .columns = 2}),
        design_of(LayoutKind::grid, 64, 64, {.scheme = AddressingScheme::individual}),
        design_of(LayoutKind::grid, 30, 30, {.scheme = AddressingScheme::blocks, .rows = 1, .columns = 1}),
        design_of(LayoutKind::grid, 1, 60, {.scheme = AddressingScheme::individual}),
        design_of(LayoutKind::grid, 60, 1, {.scheme = AddressingScheme::individual}),
        design_of(LayoutKind::grid, 1, 1, {.scheme = AddressingScheme::individual})};
    designs[1].firing.zones_at_once = 3;
    designs[1].firing.gap = 0;
    designs[4].firing.shots = 2000;
    designs[7].firing.shots = 1;
    designs[7].firing.frame_period = 0.1;
    return designs;
}

struct Made {
    EmitterArray array;
    FiringPlan plan;
    std::vector<double> temperature;
};

// Temperatures fall from a place right of and above the middle [K].
Made made(const Design& design) {
    Made made{.array = build_array(design.emitters, FieldSense::upright, ""), .plan = {}, .temperature = {}};
    made.plan = plan_firing(design, made.array);
    for (const Vec2& p : made.array.positions)
        made.temperature.push_back(zero_celsius + 85 - 10e6 * (p - Vec2(100e-6, 60e-6)).squaredNorm());
    return made;
}

bool says(const Canvas& canvas, const std::string& words) {
    return std::ranges::any_of(
        canvas.labels(), [&](const Label& label) { return label.text.find(words) != std::string::npos; });
}

void check_texts(const Canvas& canvas) {
    for (std::size_t i = 0; i < canvas.labels().size(); ++i) {
        CAPTURE(canvas.labels()[i].text);
        CHECK(canvas.page().holds(canvas.labels()[i].box));
        for (std::size_t k = 0; k < i; ++k)
            CHECK_FALSE(canvas.labels()[i].box.overlaps(canvas.labels()[k].box));
    }
}

// Pixels of a colour, and the rectangle they lie in.
struct Patch {
    int count = 0;
    int left = std::numeric_limits<int>::max(), top = left, right = -1, bottom = -1;
};

Patch patch_of(const Canvas& canvas, const Colour& colour) {
    Patch patch;
    const std::array parts{colour.red, colour.green, colour.blue};
    for (int row = 0; row < canvas.pixel_height(); ++row)
        for (int column = 0; column < canvas.pixel_width(); ++column) {
            const std::size_t at = (static_cast<std::size_t>(row) * canvas.pixel_width() + column) * 3;
            bool same = true;
            for (std::size_t k = 0; k < 3; ++k)
                same = same && std::lround(255 * parts[k]) == canvas.pixels()[at + k];
            if (!same) continue;
            ++patch.count;
            patch.left = std::min(patch.left, column), patch.right = std::max(patch.right, column);
            patch.top = std::min(patch.top, row), patch.bottom = std::max(patch.bottom, row);
        }
    return patch;
}

std::size_t colours_in(const Canvas& canvas) {
    std::set<std::array<std::uint8_t, 3>> colours;
    for (std::size_t i = 0; i < canvas.pixels().size(); i += 3)
        colours.insert({canvas.pixels()[i], canvas.pixels()[i + 1], canvas.pixels()[i + 2]});
    return colours.size();
}

}  // namespace

TEST_CASE("texts of chip pictures lie on the page and keep clear of each other") {
    for (const Design& design : every_design())
        for (const std::string& name :
             {std::string("A chip"),
              std::string("A chip with a name that is long enough for its title to need "
                          "more than one line on a page of usual width")}) {
            const Made chip = made(design);
            CAPTURE(chip.array.size());
            const Canvas map = junction_map_picture(name, chip.array, chip.temperature);
            check_texts(map);
            CHECK(colours_in(map) > 50);
            const Canvas times = firing_times_picture(name, chip.plan);
            check_texts(times);
            CHECK(says(times, "A chip"));
        }
}

TEST_CASE("the same chip gives the same picture") {
    const Made chip = made(blocks_design());
    CHECK(png(junction_map_picture("", chip.array, chip.temperature)) ==
          png(junction_map_picture("", chip.array, chip.temperature)));
    CHECK(png(firing_times_picture("", chip.plan)) == png(firing_times_picture("", chip.plan)));
}

TEST_CASE("the junction map names the hottest zone and shows the emitters where they are") {
    Made chip = made(blocks_design());
    std::fill(chip.temperature.begin(), chip.temperature.end(), zero_celsius + 40);
    chip.temperature[11] = zero_celsius + 70;  // last of the first row: zone 2
    const Canvas canvas = junction_map_picture("Blocks", chip.array, chip.temperature);
    CHECK(says(canvas, "zone 2: 70.0 °C"));
    CHECK(says(canvas, "96 emitters in 6 zones at 40.0 to 70.0 °C"));
    CHECK(says(canvas, "Junction temperature (°C)"));
    CHECK(says(canvas, "Horizontal place (µm)"));
    // The light end of the scale shows at this emitter and in the colour bar only.
    const Patch coldest = patch_of(canvas, sequential_colour(0));
    chip.temperature[11] = zero_celsius + 40;
    chip.temperature[84] = zero_celsius + 70;  // first of the last row: zone 3
    const Canvas other = junction_map_picture("Blocks", chip.array, chip.temperature);
    CHECK(says(other, "zone 3: 70.0 °C"));
    const Patch hot = patch_of(other, sequential_colour(1));
    CHECK(hot.count > 0);
    CHECK(std::abs(hot.left - coldest.left) <= 2);      // the left column
    CHECK(std::abs(hot.bottom - coldest.bottom) <= 2);  // the lowest row
}

TEST_CASE("equal temperatures still make a map, and the first zone is named") {
    const Made chip = made(blocks_design());
    const std::vector<double> even(chip.array.size(), 300);
    CHECK(says(junction_map_picture("", chip.array, even), "zone 0: 26.9 °C"));
}

TEST_CASE("firing times: a bar for every zone, where it fires") {
    const Design design = blocks_design();
    const Made chip = made(design);
    const Canvas canvas = firing_times_picture("Blocks", chip.plan);
    CHECK(says(canvas, "6 zones, 1 at once; 6 dwells of 10 µs with gaps of 5 µs in a frame of 90 µs"));
    CHECK(says(canvas, "First dwell: zone 0, 10 shots of 3 ns, one every 1 µs"));
    CHECK(says(canvas, "Gap of 5 µs to the next dwell"));
    CHECK(says(canvas, "Shots of the next dwell: zone 1"));
    // Fired in the opposite order the other dwells lie elsewhere, but take as much of the page.
    FiringPlan turned = chip.plan;
    std::reverse(turned.zones.begin() + 1, turned.zones.end());
    const Canvas other = firing_times_picture("Blocks", turned);
    CHECK(png(other) != png(canvas));
    CHECK(patch_of(other, palette::categories[2]).count == patch_of(canvas, palette::categories[2]).count);
}

TEST_CASE("the zone axis marks whole zones only") {
    for (int zones = 1; zones <= 40; ++zones) {
        CAPTURE(zones);
        const Made chip =
            made(design_of(LayoutKind::grid, 1, zones, {.scheme = AddressingScheme::individual}));
        const Canvas canvas = firing_times_picture("", chip.plan);
        // Numbers left of the axis are the ones that end furthest left; the power below has its own 0.5.
        int halves = 0;
        for (const Label& label : canvas.labels())
            halves += label.box.right < 80 && label.text.find(".5") != std::string::npos;
        CHECK(halves == 1);
        CHECK(says(canvas, "Zone"));
    }
}

TEST_CASE("every one of thousands of zones shows") {
    const Made chip = made(design_of(LayoutKind::grid, 64, 64, {.scheme = AddressingScheme::individual}));
    const Canvas canvas = firing_times_picture("", chip.plan);
    const Patch dwells = patch_of(canvas, palette::categories[2]);
    // 4096 bars in raster order make an unbroken slope: at least one pixel in each column and row of the
    // plot.
    CHECK(dwells.count > 1500);
    CHECK(says(canvas, "4096 zones"));
}

TEST_CASE("of a dwell with many shots the last ones are shown, a long gap is cut") {
    Design design = blocks_design();
    design.firing.shots = 2000;
    CHECK(says(firing_times_picture("", made(design).plan), "; its last 200 are shown"));
    design.firing.shots = 10;
    design.firing.gap = 1e-3;
    const Canvas cut = firing_times_picture("", made(design).plan);
    CHECK(says(cut, "Gap of 1 ms to the next dwell, not shown to its end"));
    CHECK_FALSE(says(cut, "Shots of the next dwell"));
    design.firing.gap = 0;
    const Canvas none = firing_times_picture("", made(design).plan);
    CHECK(says(none, "without gaps"));
    CHECK_FALSE(says(none, "Gap of"));
}

TEST_CASE("pictures of nothing are refused") {
    const Made chip = made(blocks_design());
    CHECK_THROWS_WITH_AS((void)junction_map_picture("", chip.array, std::vector<double>(3, 300)),
                         doctest::Contains("a map of 96 emitters was given 3 temperatures"), Error);
    std::vector<double> bad = chip.temperature;
    bad[5] = std::nan("");
    CHECK_THROWS_AS((void)junction_map_picture("", chip.array, bad), Error);
    CHECK_THROWS_AS((void)junction_map_picture("", EmitterArray{}, {}), Error);
    CHECK_THROWS_WITH_AS((void)firing_times_picture("", FiringPlan{}), doctest::Contains("without a dwell"),
                         Error);
}
