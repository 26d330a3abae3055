// Sunlight, lamps, air and the link budget against published and derived values.
#include "about.h"

#include <glint/core/constants.h>
#include <glint/core/files.h>
#include <glint/core/text.h>
#include <glint/ranging/air.h>
#include <glint/ranging/link.h>
#include <glint/ranging/spectrum.h>

#include <doctest/doctest.h>
#include <cmath>
#include <cstdlib>

using namespace glint;

namespace {
double sun_mean(double centre, double half) {
    return sun_band_irradiance((centre - half) * 1e-9, (centre + half) * 1e-9) / (2 * half);
}
}  // namespace

TEST_CASE("sunlight, ASTM G173-03 global: integral and band means") {
    // Trapezoid integrals of the published table (two public copies agree): 400-1700 nm 899.516 W/m2; means
    // W/m2/nm.
    CHECK(sun_band_irradiance(400e-9, 1700e-9) == about(899.516).epsilon(1e-5));
    const double means[][3] = {{850, 5, 0.9607},  {850, 10, 0.9761}, {850, 20, 0.9689},  {905, 5, 0.7072},
                               {905, 10, 0.6904}, {905, 20, 0.7467}, {940, 5, 0.3047},   {940, 10, 0.3041},
                               {940, 20, 0.4135}, {1550, 5, 0.2709}, {1550, 10, 0.2700}, {1550, 20, 0.2685},
                               {920, 10, 0.675},  {930, 10, 0.480},  {935, 10, 0.385},   {945, 10, 0.320},
                               {950, 10, 0.347},  {960, 10, 0.441},  {970, 10, 0.575}};
    for (const auto& [centre, half, mean] : means)
        CHECK_MESSAGE(std::abs(sun_mean(centre, half) - mean) <
                          (mean < 0.68 && half == 10 && centre != 940 && centre != 1550 ? 6e-4 : 1e-4),
                      centre);
}

TEST_CASE("the compact solar table against the published one, where that is at hand") {
    // GLINT_SOLAR_TABLE names a CSV of ASTM G173-03: wavelength nm, global, direct, extraterrestrial, 400 to
    // 1700 nm by 1 nm.
    const char* file = std::getenv("GLINT_SOLAR_TABLE");
    if (file == nullptr) {
        MESSAGE("GLINT_SOLAR_TABLE is not set: the published table is not compared");
        return;
    }
    std::vector<double> columns[3];
    const std::string table = read_file(file);
    for (const std::string_view line : split(table, '\n')) {
        const auto cells = split(line, ',');
        if (cells.size() != 4 || !parse_number(cells[0]).good) continue;
        for (int c = 0; c < 3; ++c) columns[c].push_back(parse_number(cells[c + 1]).value);
    }
    REQUIRE(columns[0].size() == 1301);
    const double integrals[] = {899.516, 815.605, 1126.497};  // computed from two public copies, W/m2
    for (int c = 0; c < 3; ++c) {
        double sum = 0;
        for (std::size_t i = 0; i + 1 < 1301; ++i) sum += (columns[c][i] + columns[c][i + 1]) / 2;
        CHECK(std::abs(sum - integrals[c]) < 0.01);
    }
    for (std::size_t bin = 0; bin < 260; ++bin) {
        double sum = 0;
        for (std::size_t i = 5 * bin; i < 5 * bin + 5; ++i) sum += (columns[0][i] + columns[0][i + 1]) / 2;
        const double from = 400e-9 + 5e-9 * static_cast<double>(bin);
        CHECK(sun_band_irradiance(from, from + 5e-9) == about(sum).epsilon(1e-5));  // six digits are kept
    }
}

TEST_CASE("illuminance of that sunlight") {
    // 683 lm/W times the integral with the CIE 1924 V(lambda) on a 1 nm grid, 400-830 nm: 109 493 lx.
    CHECK(std::abs(sun_illuminance() - 109493) < 5);
}

TEST_CASE("sunlight at 100 klx in a filter band") {
    // Derived by the scaling rule E(x klx) = E x / 109.495; W/m2 in +-5 / 10 / 20 nm.
    const double bands[][4] = {{850, 8.774, 17.828, 35.395},
                               {905, 6.459, 12.611, 27.279},
                               {940, 2.783, 5.555, 15.106},
                               {1550, 2.474, 4.931, 9.807}};
    const Environment sun{.source = AmbientSource::sun, .illuminance = 100e3};
    for (const auto& [centre, five, ten, twenty] : bands) {
        CHECK(ambient_band_irradiance(sun, {.center = centre * 1e-9, .width = 10e-9}) ==
              about(five).epsilon(3e-4));
        CHECK(ambient_band_irradiance(sun, {.center = centre * 1e-9, .width = 20e-9}) ==
              about(ten).epsilon(3e-4));
        CHECK(ambient_band_irradiance(sun, {.center = centre * 1e-9, .width = 40e-9}) ==
              about(twenty).epsilon(3e-4));
    }
    CHECK(ambient_band_irradiance({.source = AmbientSource::none, .illuminance = 1e5},
                                  {.center = 940e-9, .width = 20e-9}) == 0);
}

TEST_CASE("filament lamps, Planck's law and V(lambda)") {
    // mW/m2/nm per klx at 850 / 905 / 940 / 1550 nm, computed from the two tables.
    const double lamps[][5] = {{2856, 36.4, 38.1, 38.8, 27.2}, {3200, 26.5, 26.8, 26.7, 15.1}};
    const double at[] = {850, 905, 940, 1550};
    for (const auto& lamp : lamps)
        for (int i = 0; i < 4; ++i) {
            const double per_klx =
                lamp_band_irradiance(lamp[0], (at[i] - 0.5) * 1e-9, (at[i] + 0.5) * 1e-9) * 1e6;
            CHECK(per_klx == about(lamp[i + 1]).epsilon(2e-3));  // published to three digits
        }
}

TEST_CASE("extinction by haze and fog, Kim 2001") {
    // Kim, McArthur, Korevaar, Proc. SPIE 4214 (2001), per km; recomputed. Visibility km, wavelength nm.
    const double cases[][3] = {
        {23, 850, 0.09658}, {23, 905, 0.08902}, {23, 940, 0.08474}, {23, 1550, 0.04423}, {5, 850, 0.4763},
        {5, 905, 0.4435},   {5, 940, 0.4247},   {5, 1550, 0.2401},  {1, 850, 3.1468},    {1, 905, 3.0497},
        {1, 940, 2.9924},   {1, 1550, 2.3303},  {0.2, 850, 19.56},  {0.2, 1550, 19.56}};
    for (const auto& [visibility, wavelength, sigma] : cases)
        CHECK(extinction(visibility * 1e3, wavelength * 1e-9) * 1e3 == about(sigma).epsilon(1e-3));
    // Two-way transmission over 100 m at 905 nm.
    const double two_way[][2] = {{23, 0.98235}, {5, 0.91513}, {1, 0.54338}, {0.2, 0.02000}};
    for (const auto& [visibility, t] : two_way)
        CHECK(std::exp(-200 * extinction(visibility * 1e3, 905e-9)) == about(t).epsilon(1e-3));
}

TEST_CASE("group index of air, Ciddor 1996") {
    // Ciddor (1996) dry standard air, derivative taken numerically by the source: (n_g - 1) e4.
    const double expected[][2] = {{780, 2.8036},  {850, 2.7911},  {905, 2.7833}, {940, 2.7791},
                                  {1064, 2.7673}, {1310, 2.7532}, {1550, 2.7455}};
    for (const auto& [wavelength, group] : expected)
        CHECK(std::abs((air_group_index(wavelength * 1e-9) - 1) * 1e4 - group) < 1e-4);
}

TEST_CASE("link budget: background on a pixel") {
    // Derived: 100 klx, +-10 nm, rho 0.5, N 1.4, tau 0.8, 10 um pixel: E_pix and photons per second.
    const double cases[][3] = {
        {850, 0.9096, 3.8921e8}, {905, 0.6434, 2.9313e8}, {940, 0.2834, 1.3412e8}, {1550, 0.2516, 1.9631e8}};
    for (const auto& [wavelength, on_pixel, photons] : cases) {
        const double band = ambient_band_irradiance({.source = AmbientSource::sun, .illuminance = 1e5},
                                                    {.center = wavelength * 1e-9, .width = 20e-9});
        const double f = 5e-3, pupil = pi / 4 * std::pow(f / 1.4, 2), solid_angle = std::pow(10e-6 / f, 2);
        const double power = extended_energy(band, lambertian(0.5, 1), solid_angle, pupil, 0.8);
        CHECK(power / 1e-10 == about(on_pixel).epsilon(1e-3));
        CHECK(power / photon_energy(wavelength * 1e-9) == about(photons).epsilon(1e-3));
    }
}

TEST_CASE("link budget: a spot on a target, a zone over a target, sheeting") {
    const double t2 = std::exp(-200 * extinction(23e3, 905e-9));
    const double area = pi / 4 * 25e-3 * 25e-3;
    // Standard lidar equation (Richmond and Cain), derived numbers: 1 uJ, 905 nm, D 25 mm, rho 0.1, 100 m,
    // eta 0.7, V 23 km.
    CHECK(returned_energy(1e-6, lambertian(0.1, 1), area, 100, 0.7 * t2) / photon_energy(905e-9) ==
          about(4895).epsilon(1e-3));
    CHECK(returned_energy(1e-6, lambertian(0.1, 1), area, 100, 0.7) / photon_energy(905e-9) ==
          about(4983).epsilon(1e-3));
    // Sheeting of R_A cd/lx/m2, a per-steradian ratio: 70 / 250 / 330.
    const double sheeting[][2] = {{70, 1.0765e7}, {250, 3.8446e7}, {330, 5.0748e7}};
    for (const auto& [coefficient, photons] : sheeting)
        CHECK(returned_energy(1e-6, coefficient, area, 100, 0.7 * t2) / photon_energy(905e-9) ==
              about(photons).epsilon(1e-3));
    // 100 W over 60 x 45 deg (0.77012 sr) for 2 ns at 5 m, rho 0.1, N 1.4, tau 0.8, 10 um pixel, 940 nm:
    // 0.05016 photons.
    const double exposure = 100 / 0.77012 / 25 * 2e-9, f = 5e-3;
    CHECK(extended_energy(exposure, lambertian(0.1, 1), std::pow(10e-6 / f, 2), pi / 4 * std::pow(f / 1.4, 2),
                          0.8) /
              photon_energy(940e-9) ==
          about(0.05016).epsilon(1e-3));
}

TEST_CASE("photons per joule") {
    // h and c exact (SI): 850 / 905 / 940 / 1550 nm.
    const double expected[][2] = {{850, 4.2790e18}, {905, 4.5559e18}, {940, 4.7321e18}, {1550, 7.8029e18}};
    for (const auto& [wavelength, count] : expected)
        CHECK(1 / photon_energy(wavelength * 1e-9) == about(count).epsilon(2e-5));
}
