// Background light: compact tables of sunlight and of the eye's response, and the Planckian lamp.
#include <glint/core/constants.h>
#include <glint/ranging/spectrum.h>

#include <algorithm>
#include <array>
#include <cmath>

namespace glint {
namespace {

constexpr double table_start = 400e-9;  // both tables start here
constexpr double table_step = 5e-9;

// ASTM G173-03 global tilted irradiance, means over [start, start + 5 nm] [W/m2/nm].
constexpr std::array<double, 260> sun{
    1.16808,     1.14128,     1.18801,     1.21432,     1.23002,
    1.14556,     1.10771,     1.29181,     1.40318,     1.46488,  // 400 nm
    1.53393,     1.55481,     1.57395,     1.54321,     1.56516,
    1.59368,     1.60234,     1.45685,     1.56493,     1.57208,  // 450 nm
    1.51454,     1.5688,      1.54887,     1.43368,     1.54477,
    1.51599,     1.54737,     1.54916,     1.5188,      1.53534,  // 500 nm
    1.54789,     1.50668,     1.51853,     1.49379,     1.49157,
    1.47811,     1.53016,     1.45157,     1.44153,     1.46553,  // 550 nm
    1.46696,     1.48269,     1.45861,     1.45106,     1.43473,
    1.40298,     1.41564,     1.4498,      1.44329,     1.39575,  // 600 nm
    1.40657,     1.31499,     1.39332,     1.42108,     1.40772,
    1.40175,     1.38647,     1.16778,     1.24725,     1.29931,  // 650 nm
    1.28353,     1.31143,     1.30108,     1.09072,     1.10769,
    1.06723,     1.16575,     1.20917,     1.2311,      1.24248,  // 700 nm
    1.23328,     1.12429,     0.447189,    0.990757,    1.17391,
    1.17413,     1.1606,      1.13704,     1.09558,     1.09019,  // 750 nm
    1.07546,     1.07508,     0.993565,    0.858065,    0.894519,
    0.928046,    0.933681,    0.99826,     1.00297,     0.988728,  // 800 nm
    0.932708,    0.979816,    0.987328,    0.927723,    0.953114,
    0.946214,    0.929056,    0.92181,     0.885594,    0.694557,  // 850 nm
    0.716109,    0.698296,    0.652671,    0.669872,    0.734982,
    0.640656,    0.28875,     0.257115,    0.352282,    0.318331,  // 900 nm
    0.352927,    0.362931,    0.465754,    0.582529,    0.639126,
    0.612213,    0.691591,    0.736802,    0.747599,    0.741906,  // 950 nm
    0.727756,    0.717412,    0.718699,    0.704245,    0.695071,
    0.692716,    0.683591,    0.676418,    0.66909,     0.657071,  // 1000 nm
    0.650718,    0.638064,    0.628142,    0.612012,    0.611157,
    0.604374,    0.58843,     0.573589,    0.551604,    0.51912,  // 1050 nm
    0.479183,    0.440421,    0.335578,    0.161512,    0.1295,
    0.10428,     0.153556,    0.210825,    0.208853,    0.168065,  // 1100 nm
    0.209804,    0.308788,    0.381108,    0.410241,    0.430409,
    0.447879,    0.412184,    0.423706,    0.459575,    0.430975,  // 1150 nm
    0.422679,    0.44072,     0.438284,    0.454115,    0.453809,
    0.459243,    0.465005,    0.465213,    0.459184,    0.458394,  // 1200 nm
    0.449757,    0.437732,    0.39844,     0.356418,    0.405863,
    0.421263,    0.407505,    0.419388,    0.407963,    0.38807,  // 1250 nm
    0.353878,    0.352808,    0.312471,    0.302091,    0.277318,
    0.246917,    0.178616,    0.180522,    0.13796,     0.0403483,  // 1300 nm
    0.00290934,  2.55314e-05, 1.11805e-06, 3.68601e-06, 7.76293e-05,
    0.000348739, 9.48763e-06, 0.000206835, 0.000161197, 0.000426412,  // 1350 nm
    0.000990883, 0.000944261, 0.00575914,  0.013451,    0.0197467,
    0.0327285,   0.030196,    0.0326083,   0.0439294,   0.0631423,  // 1400 nm
    0.0679962,   0.116159,    0.101069,    0.0689137,   0.069862,
    0.0889275,   0.110535,    0.123569,    0.185217,    0.204172,  // 1450 nm
    0.212323,    0.234012,    0.252329,    0.253543,    0.271186,
    0.26768,     0.271044,    0.271771,    0.270694,    0.272309,  // 1500 nm
    0.269441,    0.267383,    0.266674,    0.258357,    0.237817,
    0.235374,    0.247786,    0.248477,    0.25176,     0.247167,  // 1550 nm
    0.227443,    0.231749,    0.23249,     0.237487,    0.238629,
    0.240057,    0.23537,     0.225422,    0.219197,    0.220426,  // 1600 nm
    0.218933,    0.222425,    0.22076,     0.2072,      0.215988,
    0.211102,    0.202911,    0.208326,    0.204735,    0.201581,  // 1650 nm
};

// Photopic luminous efficiency V(lambda), CIE 1924, every 5 nm.
constexpr std::array<double, 87> luminous{
    0.000396,   0.00064,    0.00121,    0.00218,    0.004,      0.0073,     0.0116,
    0.01684,    0.023,      0.0298,  // 400 nm
    0.038,      0.048,      0.06,       0.0739,     0.09098,    0.1126,     0.13902,
    0.1693,     0.20802,    0.2586,  // 450 nm
    0.323,      0.4073,     0.503,      0.6082,     0.71,       0.7932,     0.862,
    0.91485,    0.954,      0.9803,  // 500 nm
    0.99495,    1,          0.995,      0.9786,     0.952,      0.9154,     0.87,
    0.8163,     0.757,      0.6949,  // 550 nm
    0.631,      0.5668,     0.503,      0.4412,     0.381,      0.321,      0.265,
    0.217,      0.175,      0.1382,  // 600 nm
    0.107,      0.0816,     0.061,      0.04458,    0.032,      0.0232,     0.017,
    0.01192,    0.00821,    0.005723,  // 650 nm
    0.004102,   0.002929,   0.002091,   0.001484,   0.001047,   0.00074,    0.00052,
    0.0003611,  0.0002492,  0.0001719,  // 700 nm
    0.00012,    8.48e-05,   6e-05,      4.24e-05,   3e-05,      2.12e-05,   1.499e-05,
    1.06e-05,   7.4657e-06, 5.2578e-06,                                                  // 750 nm
    3.7029e-06, 2.6078e-06, 1.8366e-06, 1.2934e-06, 9.1093e-07, 6.4153e-07, 4.5181e-07,  // 800 nm
};

constexpr double lumens_per_watt = 683;

double wavelength_at(std::size_t i) { return table_start + table_step * static_cast<double>(i); }

// Spectral exitance of a black body [W/m2/m] (Planck).
double planckian(double wavelength, double temperature) {
    const double x = planck * speed_of_light / (wavelength * boltzmann * temperature);
    return 2 * pi * planck * speed_of_light * speed_of_light / std::pow(wavelength, 5) / std::expm1(x);
}

}  // namespace

double sun_band_irradiance(double low, double high) {
    double sum = 0;
    for (std::size_t i = 0; i < sun.size(); ++i) {
        const double from = std::max(low, wavelength_at(i)), to = std::min(high, wavelength_at(i + 1));
        if (to > from) sum += sun[i] * (to - from) * 1e9;
    }
    return sum;
}

double sun_illuminance() {
    double sum = 0;
    for (std::size_t i = 0; i + 1 < luminous.size(); ++i) sum += sun[i] * (luminous[i] + luminous[i + 1]) / 2;
    return lumens_per_watt * sum * table_step * 1e9;
}

double lamp_band_irradiance(double colour_temperature, double low, double high) {
    double lux = 0;
    for (std::size_t i = 0; i < luminous.size(); ++i)
        lux += lumens_per_watt * luminous[i] * planckian(wavelength_at(i), colour_temperature) * table_step;
    constexpr int pieces = 64;  // Simpson; the curve is smooth over any filter
    const double step = (high - low) / pieces;
    double band = 0;
    for (int i = 0; i <= pieces; ++i) {
        const double weight = i == 0 || i == pieces ? 1 : (i % 2 == 1 ? 4 : 2);
        band += weight * planckian(low + i * step, colour_temperature);
    }
    return band * step / 3 / lux;
}

bool passes(const Filter& filter, double wavelength) {
    return std::abs(wavelength - filter.center) <= filter.width / 2;
}

double ambient_band_irradiance(const Environment& environment, const Filter& filter) {
    const double low = filter.center - filter.width / 2, high = filter.center + filter.width / 2;
    switch (environment.source) {
        case AmbientSource::none:
            return 0;
        case AmbientSource::sun:
            return sun_band_irradiance(low, high) * environment.illuminance / sun_illuminance();
        case AmbientSource::lamp:
            return lamp_band_irradiance(environment.colour_temperature, low, high) * environment.illuminance;
    }
    return 0;
}

}  // namespace glint
