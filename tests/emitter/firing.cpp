// The firing plan over one frame.
#include "about.h"

#include <glint/core/error.h>
#include <glint/emitter/firing.h>

#include <doctest/doctest.h>
#include <set>

using namespace glint;

namespace {

Design small_design() {
    Design design;
    design.emitters.aperture = 5e-6;
    design.emitters.layout = {.kind = LayoutKind::grid, .rows = 4, .columns = 4, .pitch = 20e-6};
    design.emitters.addressing = {.scheme = AddressingScheme::individual};
    design.drive = {.peak_power = 0.1, .pulse_width = 3e-9};
    design.firing = {.zones_at_once = 1, .shots = 10, .repetition = 1e6, .gap = 5e-6};
    return design;
}

FiringPlan plan_of(const Design& design) {
    return plan_firing(design, build_array(design.emitters, FieldSense::upright, ""));
}

}  // namespace

TEST_CASE("a frame fires every zone once, in raster order, dwell after dwell") {
    const FiringPlan plan = plan_of(small_design());
    REQUIRE(plan.dwells() == 16);
    for (int d = 0; d < 16; ++d) CHECK(plan.zones_of(d)[0] == d);
    CHECK(plan.start[1] == about(15e-6));  // 10 shots at 1 us and a gap of 5 us
    CHECK(plan.frame_period == about(16 * 15e-6));
}

TEST_CASE("several zones at once share dwells, the last may hold fewer") {
    Design design = small_design();
    design.firing.zones_at_once = 3;
    const FiringPlan plan = plan_of(design);
    CHECK(plan.dwells() == 6);
    CHECK(plan.zones_of(5).size() == 1);
    std::multiset<int> fired;
    for (int d = 0; d < plan.dwells(); ++d)
        for (const int zone : plan.zones_of(d)) fired.insert(zone);
    CHECK(fired.size() == 16);
    CHECK(std::set<int>(fired.begin(), fired.end()).size() == 16);
}

TEST_CASE("the zones of a dwell are neighbours in the firing order, not in number") {
    Design design = small_design();
    design.firing.order = FiringOrder::stride;
    design.firing.stride = 5;
    design.firing.zones_at_once = 3;
    const FiringPlan plan = plan_of(design);
    CHECK(plan.zones == std::vector<int>{0, 5, 10, 15, 1, 6, 11, 2, 7, 12, 3, 8, 13, 4, 9, 14});
    CHECK(plan.zones_of(1)[0] == 15);
    CHECK(plan.zones_of(1)[1] == 1);
    CHECK(plan.zones_of(1)[2] == 6);
}

TEST_CASE("average power is energy a frame over the frame period") {
    const Design design = small_design();
    const EmitterArray array = build_array(design.emitters, FieldSense::upright, "");
    const FiringPlan plan = plan_firing(design, array);
    CHECK(average_power(plan, array, 0.1) == about(16 * 10 * 0.1 * 3e-9 / (16 * 15e-6)));
}

TEST_CASE("plans that cannot be are refused") {
    Design design = small_design();
    design.firing.zones_at_once = 17;
    CHECK_THROWS_WITH_AS((void)plan_of(design), doctest::Contains("17 zones at once, but there are only 16"),
                         Error);
    design = small_design();
    design.firing.frame_period = 100e-6;
    CHECK_THROWS_WITH_AS((void)plan_of(design), doctest::Contains("its 16 dwells take 240 us"), Error);
}

TEST_CASE("a matrix fires only products of rows and columns") {
    Design design = small_design();
    design.emitters.addressing = {.scheme = AddressingScheme::matrix};
    design.firing.zones_at_once = 3;  // 0 1 2 is a product, 3 4 5 is none
    CHECK_THROWS_WITH_AS((void)plan_of(design), doctest::Contains("cannot fire the 3 zones of dwell 1 alone"),
                         Error);
    for (const int at_once : {1, 2, 4, 8, 16}) {
        design.firing.zones_at_once = at_once;
        CHECK(plan_of(design).dwells() == 16 / at_once);
    }
    design.firing.zones_at_once = 2;
    design.firing.order = FiringOrder::serpentine;  // 0 1, 2 3, 7 6, ...: pairs in one row
    CHECK(plan_of(design).dwells() == 8);
    design.firing.order = FiringOrder::farthest_next;  // opposite corners need two row and two column lines
    CHECK_THROWS_WITH_AS((void)plan_of(design), doctest::Contains("cannot fire the 2 zones of dwell 0 alone"),
                         Error);
}
