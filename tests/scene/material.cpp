// Reflectance over wavelength.
#include "about.h"

#include <glint/scene/material.h>

#include <doctest/doctest.h>

using namespace glint;

TEST_CASE("one entry is a constant reflectance") {
    const Material wall{.name = "wall", .table = {{.wavelength = 905e-9, .reflectance = 0.8}}};
    for (const double wavelength : {400e-9, 905e-9, 1550e-9}) CHECK(reflectance(wall, wavelength) == 0.8);
}

TEST_CASE("several entries: linear between, met exactly at them, held outside") {
    const Material cloth{.name = "cloth", .table = {{800e-9, 0.2}, {900e-9, 0.6}, {1000e-9, 0.1}}};
    CHECK(reflectance(cloth, 800e-9) == 0.2);
    CHECK(reflectance(cloth, 900e-9) == 0.6);
    CHECK(reflectance(cloth, 1000e-9) == 0.1);
    CHECK(reflectance(cloth, 825e-9) == about(0.3).epsilon(1e-12));
    CHECK(reflectance(cloth, 950e-9) == about(0.35).epsilon(1e-12));
    CHECK(reflectance(cloth, 1e-9) == 0.2);
    CHECK(reflectance(cloth, 1) == 0.1);
}
