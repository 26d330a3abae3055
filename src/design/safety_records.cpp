// Fields of the eye-safety evaluation: tolerances and faults.
#include "design/records.h"

#include <glint/core/constants.h>
#include <glint/design/design.h>
#include <glint/design/design_record.h>

namespace glint {
namespace {

using K = Kind;

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

}  // namespace

Record eye_safety_record() {
    return Describe<EyeSafetySettings>("eye_safety", "Set-up of the eye-safety evaluation")
        .quantity("closest_access", &EyeSafetySettings::closest_access, K::length, from_to(0, 100),
                  "From the chip to the closest place a person can reach")
        .quantity("time_base", &EyeSafetySettings::time_base, K::time, from_to(0.25, 30000),
                  "Time base of the classification")
        .part(&EyeSafetySettings::tolerances, tolerances())
        .part(&EyeSafetySettings::faults, faults())
        .done();
}

}  // namespace glint
