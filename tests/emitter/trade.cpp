// Rules of the trade that the models must show. Common practice, no source.
#include "about.h"

#include <glint/emitter/array.h>
#include <glint/emitter/diode.h>
#include <glint/emitter/heat.h>

#include <doctest/doctest.h>

using namespace glint;

namespace {

// Largest steady power of a lone diode at 25 degC on a chip of 100 um.
Operation at_rollover(double aperture, int junctions, double self_conductivity) {
    const Substrate substrate{.thickness = 100e-6, .self_conductivity = self_conductivity};
    return rollover(diode_preset(aperture, 940e-9, junctions).model, 298.15,
                    self_resistance(aperture, substrate))
        .largest_power;
}

}  // namespace

TEST_CASE("a good part of 6 um reaches about 20 mW") {
    // Good: three junctions, heat drawn off through the junction side, which halves the thermal resistance.
    const double good = at_rollover(6e-6, 3, 2 * 25.5).power;
    CHECK(good > 15e-3);
    CHECK(good < 25e-3);
    // An ordinary one does not.
    CHECK(at_rollover(6e-6, 1, 25.5).power < 10e-3);
}

TEST_CASE("the smaller the aperture, the higher the current density it stands") {
    double before = 1e99;
    for (const double aperture : {4e-6, 6e-6, 8e-6, 10e-6, 12e-6, 15e-6}) {
        const double density = current_density(at_rollover(aperture, 1, 25.5).current, aperture);
        CHECK(density < before);
        before = density;
    }
}

TEST_CASE("the rollover is set by the temperature, at nearly the same rise for every aperture") {
    const double rise = at_rollover(10e-6, 1, 25.5).temperature - 298.15;
    for (const double aperture : {4e-6, 8e-6, 15e-6})
        CHECK(at_rollover(aperture, 1, 25.5).temperature - 298.15 == about(rise).epsilon(0.02));
}

TEST_CASE("256 individually addressed emitters fit a chip a few hundred micrometres wide at 24 um") {
    Emitters emitters{.wavelength = 940e-9, .aperture = 8e-6};
    emitters.layout = {.rows = 16, .columns = 16, .pitch = 24e-6};
    emitters.addressing.scheme = AddressingScheme::individual;
    const EmitterArray array = build_array(emitters, FieldSense::upright, {});
    CHECK(array.zones == 256);
    // 384 um by 384 um: 0.147 mm2.
    CHECK(packing(emitters, array).area == about(384e-6 * 384e-6).epsilon(1e-9));
}
