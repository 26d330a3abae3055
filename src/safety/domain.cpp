// The checks at the door of the safety tables.
#include <glint/core/quantity.h>
#include <glint/safety/domain.h>
#include <cmath>
#include <string>
#include "refuse.h"

namespace glint {
namespace {

// NaN touches no interval, so it is refused here too.
void check(double value, const Interval& accepted, Kind kind, const char* what) {
    if (touches(accepted, value)) return;
    const std::string shown = std::isfinite(value) ? show_quantity(value, kind) : std::to_string(value);
    refuse(std::string(what) + " " + shown + " is outside the limit tables",
           show_quantity(accepted.from, kind) + " to " + show_quantity(accepted.to, kind));
}

std::string is(const char* what, double value) { return std::string(what) + " is " + std::to_string(value); }

}  // namespace

void check_wavelength(double wavelength) { check(wavelength, limit_wavelengths, Kind::length, "wavelength"); }

void check_retinal_wavelength(double wavelength) {
    check(wavelength, retinal_wavelengths, Kind::length, "wavelength");
}

void check_photochemical_wavelength(double wavelength) {
    check(wavelength, photochemical_wavelengths, Kind::length, "wavelength");
}

void check_duration(double duration) { check(duration, limit_durations, Kind::time, "duration"); }

void check_subtense(double subtense) { check(subtense, limit_subtenses, Kind::angle, "subtense"); }

void check_positive(double value, const char* what) {
    if (!std::isfinite(value) || value <= 0) refuse(is(what, value), "a finite number greater than 0");
}

void check_not_negative(double value, const char* what) {
    if (!std::isfinite(value) || value < 0) refuse(is(what, value), "a finite number, 0 or greater");
}

}  // namespace glint
