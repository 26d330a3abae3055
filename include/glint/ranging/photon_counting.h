// Photon counting: from energy on a pixel to detection probability and range precision.
#pragma once

#include <glint/design/design.h>

namespace glint {

/// What the design alone decides about a histogram receiver.
struct CountingModel {
    double counts_per_joule = 0;  ///< detected counts for energy on the pixel's active area [1/J]
    double dark_count_rate = 0;   ///< [Hz]
    double dead_time = 0;         ///< [s]
    double timing = 0;            ///< standard deviation of one count's time [s]
    double window = 0;            ///< length of the matched rectangular window [s]
    double captured = 0;          ///< share of the signal's counts inside the window
    int bins = 0;                 ///< of the histogram
    double false_alarm = 0;       ///< allowed for one position of the window
    int shots = 1;                ///< of a dwell
    double pulse_width = 0;       ///< [s]
    double range_per_time = 0;    ///< half the speed of light in air [m/s]
};

/// Timing after Incoronato et al. (2021): sigma^2 = (pulse FWHM / 2.3548)^2 + (jitter FWHM / 2.3548)^2 +
/// bin^2 / 12. Window of 2.80 sigma, which is best against uniform background and holds 83.85 % of a Gaussian
/// (derived), but at least one bin. The false alarm of the dwell is shared among all bins as positions of the
/// window, which is conservative: p = 1 - (1 - P)^(1 / bins).
[[nodiscard]] CountingModel counting_model(const Design& design);

/// What one pixel gets out of one dwell.
struct Detection {
    double signal_shot = 0;      ///< photoelectrons of the echo per shot, before dead time
    double background_rate = 0;  ///< photoelectrons per second, dark counts included, before dead time
    double signal = 0;           ///< counts of the echo in the dwell
    double background = 0;       ///< background counts in the window, in the dwell
    int threshold = 0;           ///< least counts in the window that are taken as an echo
    double probability = 0;      ///< that the echo is detected
    double precision = 0;        ///< standard deviation of the range [m]; infinite without signal
};

/// Mean counts of background per second on a pixel [Hz]: energy rate [W] times efficiency, plus dark counts.
[[nodiscard]] double background_rate(const CountingModel& model, double power);

/// Counts of an echo in a dwell from its photoelectrons per shot. A free-running detector is armed for
/// 1 / (1 + b dead_time) of the time (textbook, non-paralysable), and counts at most once per dead time,
/// hence at most once per pulse: shots * (1 - exp(-n armed)). Without dead time every photoelectron counts.
[[nodiscard]] double echo_counts(const CountingModel& model, double signal_shot, double background_rate);

/// Background counts inside the window over the dwell.
[[nodiscard]] double window_background(const CountingModel& model, double background_rate);

/// Detection of an echo of `signal_shot` photoelectrons per shot against `background_rate` [Hz].
[[nodiscard]] Detection detect(const CountingModel& model, double signal_shot, double background_rate);

/// Cramer-Rao bound of the range [m] for an echo of S counts (whole dwell) over a background of beta counts
/// per second of histogram: sigma / sqrt(S K(rho)), rho = beta sigma sqrt(2 pi) / S, with K(rho) = integral
/// x^2 phi^2 / (phi + rho phi(0)) dx in closed form to 0.7 % (derived, checked numerically).
[[nodiscard]] double precision_bound(const CountingModel& model, double counts, double background_per_second);

/// 1 / K(rho), the growth of the variance by background: 1 + 2 sqrt(2) rho + 0.54 sqrt(1.7 rho / (1 + 1.7
/// rho)).
[[nodiscard]] double variance_growth(double rho);

}  // namespace glint
