// The one description of every field of a design.
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

Record emitters() {
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

Record drive() {
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

Record firing() {
    return Describe<Firing>("firing", "When which zone fires")
        .choice("order", &Firing::order,
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

Record lens() {
    return Describe<Lens>("lens", "A lens with the chip near its focal plane")
        .quantity("focal_length", &Lens::focal_length, K::length, from_to(50e-6, 1), "Focal length")
        .required()
        .quantity("clear_aperture", &Lens::clear_aperture, K::length, from_to(10e-6, 1),
                  "Diameter that light can pass")
        .required()
        .choice("mapping", &Lens::mapping, {"tan", "f-theta"},
                "Place on the chip to direction: x = f tan(angle) or f angle")
        .quantity("defocus", &Lens::defocus, K::length, from_to(-0.1, 0.1),
                  "Chip moved out of the focal plane")
        .quantity("blur", &Lens::blur, K::angle, from_to(0, 0.5),
                  "1/e2 half angle that aberrations add to each beam")
        .quantity("transmission", &Lens::transmission, K::ratio, above_to(0, 1),
                  "Share of the captured light that passes the glass")
        .done();
}

Record diffuser() {
    return Describe<Diffuser>("diffuser", "A diffuser with a set field")
        .choice("shape", &Diffuser::shape, {"rectangle", "round"}, "Shape of the lit field on a flat wall")
        .quantity("horizontal", &Diffuser::horizontal, K::angle, from_to(radians(0.1), radians(150)),
                  "Full field, horizontal")
        .required()
        .when("shape", {"rectangle"})
        .quantity("vertical", &Diffuser::vertical, K::angle, from_to(radians(0.1), radians(150)),
                  "Full field, vertical")
        .required()
        .when("shape", {"rectangle"})
        .quantity("diameter", &Diffuser::diameter, K::angle, from_to(radians(0.1), radians(150)),
                  "Full field, round")
        .required()
        .when("shape", {"round"})
        .quantity("roll_off", &Diffuser::roll_off, K::angle, from_to(0, radians(30)),
                  "Width of the edge from 10 % to 90 %")
        .quantity("exponent", &Diffuser::exponent, K::number, from_to(-20, 10),
                  "n of the profile I ~ cos^-n inside the field")
        .quantity("transmission", &Diffuser::transmission, K::ratio, above_to(0, 1),
                  "Share of the light that leaves within the field")
        .quantity("distance", &Diffuser::distance, K::length, from_to(0, 1),
                  "Behind the element before it, or the chip: sets the size of the lit spots")
        .done();
}

Record fan_out() {
    return Describe<FanOut>("fan_out", "A grating that makes several beams of each")
        .integer("orders_right", &FanOut::orders_right, from_to(1, 99), "Beams side by side; an odd number")
        .integer("orders_up", &FanOut::orders_up, from_to(1, 99), "Beams one above the other; an odd number")
        .quantity("period_right", &FanOut::period_right, K::length, from_to(0, 1e-3),
                  "Period of the grating across the field")
        .quantity("period_up", &FanOut::period_up, K::length, from_to(0, 1e-3),
                  "Period of the grating up the field")
        .quantity("efficiency", &FanOut::efficiency, K::ratio, above_to(0, 1),
                  "Share of the light in all wanted orders; without the zero order when that is given")
        .quantity("zero_order", &FanOut::zero_order, K::ratio, from_to(0, 1),
                  "Share of the light that goes straight on; as any other order when not given")
        .done();
}

Record optics() {
    return Describe<Optics>("optics",
                            "The projection optics, in the order light meets them; none: the bare chip")
        .sequence(&Optics::elements, {lens(), diffuser(), fan_out()})
        .done();
}

Record receiver_lens() {
    return Describe<ReceiverLens>("lens", "The receiver lens, focused at infinity")
        .quantity("focal_length", &ReceiverLens::focal_length, K::length, from_to(50e-6, 1), "Focal length")
        .required()
        .quantity("f_number", &ReceiverLens::f_number, K::number, from_to(0.5, 64),
                  "Focal length over entrance pupil diameter")
        .required()
        .choice("mapping", &ReceiverLens::mapping, {"tan", "f-theta"},
                "Direction to place on the sensor: f tan(angle) or f angle")
        .quantity("transmission", &ReceiverLens::transmission, K::ratio, above_to(0, 1),
                  "Share of the light that passes, without the filter")
        .done();
}

Record pixels() {
    return Describe<Pixels>("pixels", "The pixel grid of the receiver")
        .integer("columns", &Pixels::columns, from_to(1, 8192), "Pixels in a row")
        .required()
        .integer("rows", &Pixels::rows, from_to(1, 8192), "Rows of pixels")
        .required()
        .quantity("pitch", &Pixels::pitch, K::length, from_to(100e-9, 10e-3), "Side of a pixel")
        .required()
        .quantity("fill_factor", &Pixels::fill_factor, K::ratio, above_to(0, 1),
                  "Share of the pixel that collects light")
        .done();
}

Record filter() {
    return Describe<Filter>("filter", "The band-pass filter of the receiver")
        .quantity("center", &Filter::center, K::length, from_to(400e-9, 1800e-9), "Middle of the pass band")
        .required()
        .quantity("width", &Filter::width, K::length, from_to(0.1e-9, 500e-9), "Full width of the pass band")
        .required()
        .quantity("transmission", &Filter::transmission, K::ratio, above_to(0, 1),
                  "Transmission inside the band")
        .done();
}

Record photon_counting() {
    return Describe<PhotonCounting>("photon_counting",
                                    "Single-photon detection with a histogram of arrival times")
        .quantity("efficiency", &PhotonCounting::efficiency, K::ratio, above_to(0, 1),
                  "Photon detection efficiency of the active area")
        .required()
        .quantity("dark_count_rate", &PhotonCounting::dark_count_rate, K::frequency, from_to(0, 1e9),
                  "Dark counts of one pixel")
        .quantity("dead_time", &PhotonCounting::dead_time, K::time, from_to(0, 1e-3),
                  "Time blind after each count")
        .quantity("jitter", &PhotonCounting::jitter, K::time, from_to(0, 1e-6),
                  "Timing jitter, full width at half maximum")
        .quantity("bin", &PhotonCounting::bin, K::time, from_to(1e-12, 1e-6), "Width of a histogram bin")
        .required()
        .quantity("gate", &PhotonCounting::gate, K::length, from_to(0.01, 1e5),
                  "Length of the histogram, as range")
        .required()
        .quantity("false_alarm", &PhotonCounting::false_alarm, K::ratio, above_to(0, 0.5),
                  "Probability of a false detection in a pixel and dwell")
        .done();
}

Record receiver() {
    return Describe<Receiver>("receiver", "The receiver, looking the same way as the emitter")
        .quantity("right", &Receiver::right, K::length, from_to(-10, 10),
                  "Receiver lens to the right of the emitter")
        .quantity("up", &Receiver::up, K::length, from_to(-10, 10), "Receiver lens above the emitter")
        .part(&Receiver::lens, receiver_lens())
        .part(&Receiver::pixels, pixels())
        .part(&Receiver::filter, filter())
        .part(&Receiver::photon_counting, photon_counting())
        .done();
}

Record placement() {
    return Describe<Placement>("placement", "Where the module stands in which scene, and which way it looks")
        .file("scene", &Placement::scene, "Scene file")
        .required()
        .quantity("x", &Placement::x, K::length, from_to(-1e5, 1e5), "Place in the scene: forward")
        .quantity("y", &Placement::y, K::length, from_to(-1e5, 1e5), "Place in the scene: left")
        .quantity("z", &Placement::z, K::length, from_to(-1e5, 1e5), "Place in the scene: up")
        .quantity("heading", &Placement::heading, K::angle, from_to(-2 * pi, 2 * pi),
                  "Turned to the right of +x")
        .quantity("elevation", &Placement::elevation, K::angle, from_to(-pi / 2, pi / 2), "Looking up")
        .quantity("roll", &Placement::roll, K::angle, from_to(-2 * pi, 2 * pi),
                  "Tipped clockwise, seen from behind")
        .done();
}

Record environment() {
    return Describe<Environment>("environment", "Background light and air")
        .choice("source", &Environment::source, {"none", "sun", "lamp"},
                "What lights the scene: nothing, the sun (ASTM G173-03 global), a filament lamp")
        .quantity("illuminance", &Environment::illuminance, K::illuminance, from_to(0, 200e3),
                  "Illuminance on every surface seen")
        .required()
        .when("source", {"sun", "lamp"})
        .quantity("colour_temperature", &Environment::colour_temperature, K::temperature, from_to(1500, 6000),
                  "Colour temperature of the lamp")
        .when("source", {"lamp"})
        .quantity("visibility", &Environment::visibility, K::length, from_to(10, 200e3),
                  "Meteorological visibility; clear air when not given")
        .done();
}

Record tolerances() {
    return Describe<Tolerances>("tolerances",
                                "Spread of built modules to both sides; the verdict is for the worst corner")
        .quantity("power", &Tolerances::power, K::ratio, from_to(0, 1), "Of the peak power")
        .quantity("divergence", &Tolerances::divergence, K::ratio, from_to(0, 0.9),
                  "Of the emitters' divergence")
        .quantity("pulse_width", &Tolerances::pulse_width, K::ratio, from_to(0, 0.9), "Of the pulse width")
        .quantity("wavelength", &Tolerances::wavelength, K::length, from_to(0, 100e-9), "Of the wavelength")
        .quantity("focal_length", &Tolerances::focal_length, K::ratio, from_to(0, 0.5),
                  "Of the lens's focal length")
        .done();
}

Record faults() {
    const Range factor = from_to(1, 1e6);
    Record missing =
        Describe<ElementMissing>("element_missing", "An optical element is missing, or cracked")
            .choice("element", &ElementMissing::element, {"lens", "fan_out", "diffuser"}, "Which element")
            .required()
            .done();
    Record stuck =
        Describe<ZoneStuckOn>("zone_stuck_on", "A zone's driver does not switch off; the worst zone counts")
            .done();
    Record all = Describe<AllZonesAtOnce>("all_zones", "Every zone fires in every dwell").done();
    Record pulse = Describe<PulseTooLong>("pulse_too_long", "Pulses last longer than asked for")
                       .quantity("factor", &PulseTooLong::factor, K::number, factor, "By this factor")
                       .required()
                       .done();
    Record repetition =
        Describe<RepetitionTooHigh>("repetition_too_high", "The clock of the firing plan runs too fast")
            .quantity("factor", &RepetitionTooHigh::factor, K::number, factor, "By this factor")
            .required()
            .done();
    Record current = Describe<OverCurrent>("over_current", "More power than asked for")
                         .quantity("factor", &OverCurrent::factor, K::number, factor, "On the peak power")
                         .required()
                         .done();
    return Describe<Faults>("faults", "Single faults to judge, one at a time")
        .sequence(&Faults::list, {missing, stuck, all, pulse, repetition, current})
        .done();
}

Record eye_safety() {
    return Describe<EyeSafetySettings>("eye_safety", "Set-up of the eye-safety evaluation")
        .quantity("closest_access", &EyeSafetySettings::closest_access, K::length, from_to(0, 100),
                  "From the chip to the closest place a person can reach")
        .quantity("time_base", &EyeSafetySettings::time_base, K::time, from_to(0.25, 30000),
                  "Time base of the classification")
        .part(&EyeSafetySettings::tolerances, tolerances())
        .part(&EyeSafetySettings::faults, faults())
        .done();
}

Record requirements() {
    Record range = Describe<RangeRequirement>(
                       "range", "Distance at which a flat target facing the module is still detected")
                       .quantity("distance", &RangeRequirement::distance, K::length, above_to(0, 1e5),
                                 "Distance to reach")
                       .required()
                       .quantity("reflectance", &RangeRequirement::reflectance, K::ratio, above_to(0, 1),
                                 "Reflectance of the target")
                       .required()
                       .quantity("probability", &RangeRequirement::probability, K::ratio,
                                 from_to(0.01, 0.9999), "Detection probability")
                       .quantity("share", &RangeRequirement::share, K::ratio, above_to(0, 1),
                                 "Share of the receiver's pixels that must reach it")
                       .done();
    Record precision = Describe<PrecisionRequirement>(
                           "precision", "Standard deviation of the range on a flat target facing the module")
                           .quantity("limit", &PrecisionRequirement::limit, K::length, above_to(0, 1e3),
                                     "Largest standard deviation")
                           .required()
                           .quantity("distance", &PrecisionRequirement::distance, K::length, above_to(0, 1e5),
                                     "Distance of the target")
                           .required()
                           .quantity("reflectance", &PrecisionRequirement::reflectance, K::ratio,
                                     above_to(0, 1), "Reflectance of the target")
                           .required()
                           .quantity("share", &PrecisionRequirement::share, K::ratio, above_to(0, 1),
                                     "Share of the receiver's pixels that must hold it")
                           .done();
    Record frame_rate = Describe<FrameRateRequirement>("frame_rate", "Frames a second")
                            .quantity("minimum", &FrameRateRequirement::minimum, K::frequency,
                                      above_to(0, 1e6), "Least frame rate")
                            .required()
                            .done();
    Record safety =
        Describe<EyeSafetyRequirement>("eye_safety", "Laser class by IEC 60825-1 and margin to its limit")
            .choice("class", &EyeSafetyRequirement::laser_class, {"1", "1M", "2", "2M", "3R", "3B"},
                    "Highest class that is acceptable")
            .quantity("margin", &EyeSafetyRequirement::margin, K::ratio, from_to(0, 0.99),
                      "Share of the limit that must stay unused")
            .done();
    Record points =
        Describe<PointsRequirement>("points", "Points of one frame on a named object")
            .text("object", &PointsRequirement::object, "Name of an object of the scene")
            .required()
            .integer("minimum", &PointsRequirement::minimum, from_to(1, 1e9), "Least number of points")
            .required()
            .done();
    Record power = Describe<AveragePowerRequirement>("average_power", "Average optical power of the chip")
                       .quantity("maximum", &AveragePowerRequirement::maximum, K::power, above_to(0, 1e4),
                                 "Largest average optical power")
                       .required()
                       .done();
    return Describe<Requirements>("requirements", "What the module must reach")
        .sequence(&Requirements::list, {range, precision, frame_rate, safety, points, power})
        .done();
}

Record sampling() {
    return Describe<Sampling>("sampling", "How finely the models sample")
        .integer("rays_per_pixel", &Sampling::rays_per_pixel, from_to(1, 1024), "Rays cast from each pixel")
        .integer("rays_per_beam", &Sampling::rays_per_beam, from_to(1, 65536), "Rays cast from each beam")
        .quantity("point_probability", &Sampling::point_probability, K::ratio, above_to(0, 1),
                  "Least detection probability of a return that becomes a point")
        .integer("seed", &Sampling::seed, from_to(0, 1e9), "Seed of the samples")
        .done();
}

}  // namespace

const Record& design_record() {
    static const Record record =
        Describe<Design>("design", "One module: emitter, optics, receiver, its place, and what it must reach")
            .text("name", &Design::name, "Name of the design")
            .text("note", &Design::note, "Remark")
            .part(&Design::emitters, emitters())
            .part(&Design::drive, drive())
            .part(&Design::firing, firing())
            .part(&Design::optics, optics())
            .part(&Design::receiver, receiver())
            .part(&Design::placement, placement())
            .part(&Design::environment, environment())
            .part(&Design::eye_safety, eye_safety())
            .part(&Design::requirements, requirements())
            .part(&Design::sampling, sampling())
            .done();
    return record;
}

}  // namespace glint
