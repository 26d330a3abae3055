// Photon counting: from energy on a pixel to detection probability and range precision.
#include <glint/core/constants.h>
#include <glint/ranging/air.h>
#include <glint/ranging/photon_counting.h>
#include <glint/ranging/poisson.h>

#include <algorithm>
#include <cmath>
#include <limits>

namespace glint {
namespace {

constexpr double fwhm_over_sigma = 2.354820045;
constexpr double best_window = 2.80;  // in standard deviations

double armed_share(const CountingModel& model, double rate) { return 1 / (1 + rate * model.dead_time); }

}  // namespace

CountingModel counting_model(const Design& design) {
    const PhotonCounting& counting = design.receiver.photon_counting;
    CountingModel model;
    model.counts_per_joule = counting.efficiency / photon_energy(design.emitters.wavelength);
    model.dark_count_rate = counting.dark_count_rate;
    model.dead_time = counting.dead_time;
    model.timing =
        std::sqrt(std::pow(design.drive.pulse_width / fwhm_over_sigma, 2) +
                  std::pow(counting.jitter / fwhm_over_sigma, 2) + counting.bin * counting.bin / 12);
    model.window = std::max(best_window * model.timing, counting.bin);
    model.captured = std::erf(model.window / (2 * std::sqrt(2.0) * model.timing));
    model.range_per_time = speed_of_light / air_group_index(design.emitters.wavelength) / 2;
    model.bins =
        std::max(1, static_cast<int>(std::ceil(counting.gate / model.range_per_time / counting.bin)));
    model.false_alarm = -std::expm1(std::log1p(-counting.false_alarm) / model.bins);
    model.shots = design.firing.shots;
    model.pulse_width = design.drive.pulse_width;
    return model;
}

double background_rate(const CountingModel& model, double power) {
    return power * model.counts_per_joule + model.dark_count_rate;
}

double echo_counts(const CountingModel& model, double signal_shot, double rate) {
    if (model.dead_time <= 0) return model.shots * signal_shot;
    const double armed = armed_share(model, rate);
    // A pulse longer than the dead time can count several times: once in each stretch of one dead time.
    const double stretches = std::max(1.0, model.pulse_width / model.dead_time);
    return model.shots * stretches * -std::expm1(-signal_shot * armed / stretches);
}

double window_background(const CountingModel& model, double rate) {
    return rate * armed_share(model, rate) * model.window * model.shots;
}

double variance_growth(double rho) {
    return 1 + 2 * std::sqrt(2.0) * rho + 0.54 * std::sqrt(1.7 * rho / (1 + 1.7 * rho));
}

double precision_bound(const CountingModel& model, double counts, double background_per_second) {
    if (!(counts > 0)) return std::numeric_limits<double>::infinity();
    const double rho = background_per_second * model.timing * std::sqrt(2 * pi) / counts;
    return model.range_per_time * model.timing * std::sqrt(variance_growth(rho) / counts);
}

Detection detect(const CountingModel& model, double signal_shot, double rate) {
    Detection detection{.signal_shot = signal_shot, .background_rate = rate};
    detection.signal = echo_counts(model, signal_shot, rate);
    detection.background = window_background(model, rate);
    detection.threshold = poisson_threshold(detection.background, model.false_alarm);
    detection.probability =
        poisson_tail(detection.threshold, detection.background + model.captured * detection.signal);
    detection.precision = precision_bound(model, detection.signal, detection.background / model.window);
    return detection;
}

}  // namespace glint
