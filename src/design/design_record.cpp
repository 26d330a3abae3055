// The one description of every field of a design.
#include "design/records.h"

#include <glint/core/constants.h>
#include <glint/design/design.h>
#include <glint/design/design_record.h>

namespace glint {
namespace {

using K = Kind;

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
            .part(&Design::emitters, emitters_record())
            .part(&Design::drive, drive_record())
            .part(&Design::firing, firing_record())
            .part(&Design::optics, optics())
            .part(&Design::receiver, receiver())
            .part(&Design::placement, placement())
            .part(&Design::environment, environment())
            .part(&Design::eye_safety, eye_safety_record())
            .part(&Design::requirements, requirements())
            .part(&Design::sampling, sampling())
            .done();
    return record;
}

}  // namespace glint
