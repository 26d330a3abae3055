// Fields of the emitter chip, its drive and its firing plan.
#include "design/records.h"

#include <glint/core/constants.h>
#include <glint/design/design.h>
#include <glint/design/design_record.h>

namespace glint {
namespace {

using K = Kind;

Record layout() {
    return Describe<Layout>("layout", "Where the emitters sit on the chip")
        .choice("kind", &Layout::kind, {"grid", "hexagonal", "scattered", "list"}, "Pattern of the emitters")
        .integer("rows", &Layout::rows, from_to(1, 4096), "Rows of emitters")
        .required()
        .when("kind", {"grid", "hexagonal"})
        .integer("columns", &Layout::columns, from_to(1, 4096), "Emitters in a row")
        .required()
        .when("kind", {"grid", "hexagonal"})
        .quantity("pitch", &Layout::pitch, K::length, from_to(100e-9, 10e-3),
                  "Distance of neighbours in a row")
        .required()
        .when("kind", {"grid", "hexagonal"})
        .quantity("row_pitch", &Layout::row_pitch, K::length, from_to(100e-9, 10e-3),
                  "Distance of rows; the pitch when not given")
        .when("kind", {"grid"})
        .quantity("width", &Layout::width, K::length, above_to(0, 0.1), "Width of the area that is filled")
        .required()
        .when("kind", {"scattered"})
        .quantity("height", &Layout::height, K::length, above_to(0, 0.1), "Height of the area that is filled")
        .required()
        .when("kind", {"scattered"})
        .quantity("spacing", &Layout::spacing, K::length, from_to(100e-9, 10e-3),
                  "Least distance of two emitters")
        .required()
        .when("kind", {"scattered"})
        .integer("seed", &Layout::seed, from_to(0, 1e9), "Seed of the random places")
        .when("kind", {"scattered"})
        .file("file", &Layout::file, "CSV file with columns x_um, y_um (or _mm, _m) and, if wanted, zone")
        .required()
        .when("kind", {"list"})
        .done();
}

Record addressing() {
    return Describe<Addressing>("addressing", "Which emitters are wired to fire together as a zone")
        .choice("scheme", &Addressing::scheme,
                {"individual", "rows", "columns", "blocks", "interleaved", "matrix", "list"},
                "individual: each emitter; rows, columns: whole lines; blocks: a raster of neighbours; "
                "interleaved: "
                "every k-th; matrix: crossings of row and column lines; list: from the emitter list")
        .integer("rows", &Addressing::rows, from_to(1, 4096),
                 "Zones one above the other (interleaved: phases; matrix: row lines)")
        .when("scheme", {"rows", "blocks", "interleaved", "matrix"})
        .integer("columns", &Addressing::columns, from_to(1, 4096),
                 "Zones side by side (interleaved: phases; matrix: column lines)")
        .when("scheme", {"columns", "blocks", "interleaved", "matrix"})
        .done();
}

Record lobe() {
    return Describe<Lobe>("lobe", "What one emitter sends out before any optics")
        .choice("shape", &Lobe::shape, {"gaussian", "ring"},
                "Gaussian over a flat screen, or a ring of Gaussian wall")
        .choice("width", &Lobe::width, {"full 1/e2", "half 1/e2", "fwhm"}, "Which width the divergence is")
        .quantity("divergence", &Lobe::divergence, K::angle, above_to(0, radians(120)),
                  "Divergence of the lobe, or of the wall of the ring")
        .required()
        .quantity("ring", &Lobe::ring, K::angle, above_to(0, radians(120)),
                  "Full angle across the crest of the ring")
        .required()
        .when("shape", {"ring"})
        .done();
}

Record diode() {
    return Describe<DiodeSettings>(
               "diode", "The laser diode of one emitter; what is not given comes from fits to its aperture")
        .integer("junctions", &DiodeSettings::junctions, from_to(1, 20), "Junctions in series")
        .quantity("threshold", &DiodeSettings::threshold, K::current, above_to(0, 1),
                  "Lowest threshold current")
        .quantity("threshold_temperature", &DiodeSettings::threshold_temperature, K::temperature,
                  from_to(200, 450), "Temperature at which the threshold is lowest")
        .quantity("threshold_width", &DiodeSettings::threshold_width, K::temperature_difference,
                  from_to(20, 500), "The threshold is twice as high this far from there")
        .quantity("slope", &DiodeSettings::slope, K::slope_efficiency, above_to(0, 50),
                  "Slope of light over current at 25 degC, all junctions")
        .quantity("slope_fall", &DiodeSettings::slope_fall, K::temperature_difference, from_to(50, 1000),
                  "Rise above 25 degC at which no slope is left")
        .quantity("voltage", &DiodeSettings::voltage, K::voltage, above_to(0, 100),
                  "Voltage at zero current, all junctions")
        .quantity("resistance", &DiodeSettings::resistance, K::resistance, from_to(0, 10e3),
                  "Resistance in series")
        .done();
}

Record heat() {
    return Describe<HeatSettings>("heat", "Where the heat of the chip goes")
        .quantity("sink_temperature", &HeatSettings::sink_temperature, K::temperature, from_to(230, 400),
                  "Temperature of the heat sink")
        .quantity("substrate_thickness", &HeatSettings::substrate_thickness, K::length, from_to(5e-6, 5e-3),
                  "Thickness of the chip")
        .quantity("conductivity", &HeatSettings::conductivity, K::thermal_conductivity, from_to(1, 2500),
                  "Thermal conductivity of the substrate")
        .quantity("self_conductivity", &HeatSettings::self_conductivity, K::thermal_conductivity,
                  from_to(1, 2500), "Thermal conductivity that an emitter's own heat meets")
        .quantity("package_resistance", &HeatSettings::package_resistance, K::thermal_resistance,
                  from_to(0, 1e4), "From the far side of the chip to the heat sink")
        .quantity("pulse_heating", &HeatSettings::pulse_heating, K::number, from_to(0.1, 10),
                  "Factor on the heating by short pulses, known within a factor of 3 either way")
        .quantity("wavelength_drift", &HeatSettings::wavelength_drift, K::wavelength_drift, from_to(0, 1e-9),
                  "Of the wavelength with the junction temperature, from 25 degC on")
        .done();
}

Record driver() {
    return Describe<DriverSettings>("driver", "What drives a channel")
        .choice(
            "kind", &DriverSettings::kind, {"ramp", "resonant"},
            "ramp: a switch lets the supply ramp the current up through the loop; resonant: a capacitor is "
            "discharged into it")
        .quantity("loop_inductance", &DriverSettings::loop_inductance, K::inductance, from_to(1e-12, 1e-6),
                  "Inductance of the loop of one channel")
        .quantity("loop_resistance", &DriverSettings::loop_resistance, K::resistance, from_to(0, 1e3),
                  "Resistance of that loop without the emitters")
        .quantity("supply", &DriverSettings::supply, K::voltage, above_to(0, 1000),
                  "Supply voltage; what is needed is worked out when not given")
        .quantity("rise_time", &DriverSettings::rise_time, K::time, above_to(0, 1),
                  "Rise time asked for; a third of the pulse when not given")
        .when("kind", {"ramp"})
        .quantity("droop", &DriverSettings::droop, K::ratio, above_to(0, 1),
                  "Share of the supply that the storage capacitor of a channel may lose in a dwell")
        .when("kind", {"ramp"})
        .done();
}

}  // namespace

Record emitters_record() {
    return Describe<Emitters>("emitters", "The emitter chip")
        .quantity("wavelength", &Emitters::wavelength, K::length, from_to(400e-9, 1800e-9),
                  "Wavelength, of a diode at 25 degC")
        .required()
        .quantity("aperture", &Emitters::aperture, K::length, from_to(100e-9, 1e-3),
                  "Diameter of one emitter")
        .required()
        .quantity("near_field_radius", &Emitters::near_field_radius, K::length, above_to(0, 1e-3),
                  "1/e2 radius of the light at the emitter; half the aperture when not given")
        .part(&Emitters::layout, layout())
        .part(&Emitters::addressing, addressing())
        .part(&Emitters::lobe, lobe())
        .part(&Emitters::diode, diode())
        .part(&Emitters::heat, heat())
        .done();
}

Record drive_record() {
    return Describe<DriveSettings>("drive", "What one emitter is driven to")
        .choice(
            "by", &DriveSettings::by, {"data_sheet", "current", "power"},
            "data_sheet: every emitter sends peak_power, whatever that takes; current: the light follows "
            "from the diode and its heat; power: the current is solved so that the emitters send peak_power "
            "on average")
        .quantity("peak_power", &DriveSettings::peak_power, K::power, above_to(0, 1e3),
                  "Peak optical power of one emitter")
        .required()
        .when("by", {"data_sheet", "power"})
        .quantity("current", &DriveSettings::current, K::current, above_to(0, 100),
                  "Peak current of one emitter")
        .required()
        .when("by", {"current"})
        .quantity("pulse_width", &DriveSettings::pulse_width, K::time, from_to(10e-12, 1),
                  "Length of the pulse, full width at half maximum")
        .required()
        .choice("shape", &DriveSettings::shape, {"rectangular", "half_sine", "gaussian"},
                "Shape of the light pulse; it counts as a rectangle of the same width and energy")
        .part(&DriveSettings::driver, driver())
        .done();
}

Record firing_record() {
    return Describe<Firing>("firing", "When which zone fires")
        .choice(
            "order", &Firing::order,
            {"raster", "serpentine", "stride", "bit_reversed", "farthest_next", "shuffled", "best"},
            "Order of the zones in a frame. raster: row by row; serpentine: every other row backwards; "
            "stride: every n-th, then those next to them; bit_reversed: by the reversed bits of their "
            "numbers; "
            "farthest_next: the one farthest from all that have fired; shuffled: random; best: searched, so "
            "that zones near each other fire far apart in time")
        .integer("stride", &Firing::stride, from_to(1, 1e6), "Zones from one that fires to the next")
        .required()
        .when("order", {"stride"})
        .integer("seed", &Firing::seed, from_to(0, 1e9), "Seed of the random order or search")
        .when("order", {"shuffled", "best"})
        .quantity("exposure_weight", &Firing::exposure_weight, K::number, from_to(0, 1),
                  "How much the energy of nearby zones within a short time counts")
        .when("order", {"best"})
        .quantity("heat_weight", &Firing::heat_weight, K::number, from_to(0, 1),
                  "How much the heat that zones leave each other counts")
        .when("order", {"best"})
        .quantity("spacing_weight", &Firing::spacing_weight, K::number, from_to(0, 1),
                  "How much the distance of zones that fire one after the other counts")
        .when("order", {"best"})
        .integer("zones_at_once", &Firing::zones_at_once, from_to(1, 1e6), "Zones that fire together")
        .integer("shots", &Firing::shots, from_to(1, 1e8), "Shots of a dwell")
        .quantity("repetition", &Firing::repetition, K::frequency, from_to(0.01, 1e9),
                  "Shots a second within a dwell")
        .required()
        .quantity("gap", &Firing::gap, K::time, from_to(0, 10), "Pause after each dwell")
        .quantity("frame_period", &Firing::frame_period, K::time, above_to(0, 100),
                  "Time from frame to frame; as short as the dwells allow when not given")
        .done();
}

}  // namespace glint
