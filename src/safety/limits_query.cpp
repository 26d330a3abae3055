// Gathers everything the limit tables say about one emission.
#include <glint/safety/caution.h>
#include <glint/safety/limits_query.h>
#include "refuse.h"

namespace glint {
namespace {

std::vector<std::string> notes_on(const LimitsQuery& query) {
    const bool retinal = touches(retinal_wavelengths, query.wavelength);
    std::vector<std::string> notes;
    if (retinal && query.subtense > alpha_max(query.duration))
        notes.emplace_back(
            "The source is larger than alpha_max for this duration: the limits hold for emission taken "
            "inside an "
            "angle of acceptance of alpha_max.");
    if (retinal && query.subtense > alpha_min)
        notes.emplace_back(
            "An extended source has to be tested at the most restrictive position and part of its image, not "
            "only as a whole.");
    if (touches({700e-9, 1050e-9}, query.wavelength) &&
        touches({limit_durations.from, 1e-11}, query.duration))
        notes.emplace_back(
            "Below 10 ps the form without C4 is used from 700 nm to 1050 nm; it is the smaller of the two in "
            "question.");
    if (touches(photochemical_wavelengths, query.wavelength))
        notes.emplace_back(
            "From 400 nm to 600 nm the smaller of the thermal and the photochemical limit is shown; each is "
            "to be "
            "compared with emission inside its own angle of acceptance.");
    if (touches(second_limit_wavelengths, query.wavelength)) notes.emplace_back(second_limit_note);
    if (query.repetition)
        notes.emplace_back(
            "The pulse criteria are for Class 1, a regular train and a time base of 100 s, as energy per "
            "pulse.");
    if (query.repetition && touches({1400e-9, 1500e-9}, query.wavelength))
        notes.emplace_back(
            "From 1400 nm to 1500 nm the printed limits allow 3.3 % less average power over 0.35 s, in 1 mm, "
            "than "
            "over longer times, in 3.5 mm: test both for a beam narrower than 3.5 mm.");
    return notes;
}

}  // namespace

LimitsAnswer look_up_limits(const LimitsQuery& query) {
    if (query.pulses && !query.repetition)
        refuse("a number of pulses is given without a repetition", "a repetition as well, or neither");
    const EmissionWindow emission{query.wavelength, query.duration, query.subtense};
    LimitsAnswer answer;
    answer.query = query;
    answer.class_1 = class_limit(LaserClass::class_1, emission);
    answer.class_3R = class_limit(LaserClass::class_3R, emission);
    answer.class_3B = class_limit(LaserClass::class_3B, emission);
    if (!touches({700e-9, limit_wavelengths.to}, query.wavelength))
        answer.class_2 = class_limit(LaserClass::class_2, emission);
    if (touches(retinal_wavelengths, query.wavelength)) {
        answer.C4 = c4(query.wavelength);
        answer.C6 = c6(query.subtense, query.duration);
        answer.C7 = c7(query.wavelength);
        answer.T2 = t2(query.subtense);
        answer.alpha_max = alpha_max(query.duration);
    }
    if (query.repetition)
        answer.train = train_limits({.wavelength = query.wavelength,
                                     .duration = query.duration,
                                     .repetition = *query.repetition,
                                     .subtense = query.subtense,
                                     .pulses = query.pulses});
    answer.notes = notes_on(query);
    return answer;
}

}  // namespace glint
