// The heat of one emitter on its substrate: thermal resistance, coupling and transients in closed form.
#pragma once

#include <optional>

namespace glint {

/// What the heat of the emitters flows into: a half-space or a slab whose far side is held cold, insulated on
/// the emitters' side. The numbers are those of gallium arsenide near 300 K.
struct Substrate {
    double conductivity = 46;         ///< [W/(m K)], > 0
    std::optional<double> thickness;  ///< [m], > 0; a half-space when not set
    /// [m2/s], > 0; conductivity over 1.755e6 J/(m3 K) (density 5317 kg/m3 and 330 J/(kg K): Blakemore 1982).
    double diffusivity = 2.62e-5;
    /// What the emitter's own heat meets on its way out through the mirror below the active layers
    /// [W/(m K)], > 0; oxide apertures mounted with the substrate down (MacDougal et al. 1998). From 20 to 35
    /// in practice; junction down or flip chip up to twice that, from memory.
    double self_conductivity = 25.5;
    /// Factor on the heating by short pulses, > 0. With 1 the heat starts in a disc on the bulk. How fast a
    /// buried layer between mirrors heats within the first 100 ns is known only within a factor of 3 either
    /// way: try 1/3 and 3. It fades out as the rise nears the steady one.
    double pulse_heating = 1;
};

/// Which rise of a heated disc counts: that of a disc at one temperature, or the mean or the centre of one
/// with an even heat flux.
enum class DiscRise { isothermal, mean, centre };

/// Resistance of a disc on a half-space [K/W]: 1/(4 k a), 8/(3 pi^2 k a) or 1/(pi k a), a = diameter/2.
/// Diameter [m] and conductivity k [W/(m K)] > 0. Carslaw and Jaeger, Conduction of Heat in Solids.
[[nodiscard]] double disc_resistance(double diameter, double conductivity,
                                     DiscRise rise = DiscRise::isothermal);

/// Rise of an emitter per watt of its own heat [K/W]: the disc on a half-space of `self_conductivity`, less
/// what the cold far side of a slab takes off, ln 2/(2 pi k h) while the disc is small against the thickness
/// h. Positive for every diameter. For an even flux and one conductivity within 3 % of the
/// integral where h >= a, 7 % below.
[[nodiscard]] double self_resistance(double diameter, const Substrate& substrate,
                                     DiscRise rise = DiscRise::isothermal);

/// Steady rise at a distance > 0 [m] from an emitter per watt of its heat [K/W]: 1/(2 pi k r) on a
/// half-space; on a slab the faster one of the two series below, each good to 1e-12 where it is used.
[[nodiscard]] double coupling(double distance, const Substrate& substrate);

/// Coupling on a slab as a source and its mirror images, 1/(2 pi k) [1/r + 2 sum (-1)^n / sqrt(r^2 +
/// (2 n h)^2)]. The error is 1e-16/(k h): use up to a few thicknesses away. The thickness must be set.
[[nodiscard]] double slab_coupling_by_images(double distance, const Substrate& substrate);

/// Coupling on a slab as the modes across it, 1/(pi k h) sum K0((2 m + 1) pi r/(2 h)), m from 0. Takes about
/// 12 h/r terms. The thickness must be set.
[[nodiscard]] double slab_coupling_by_modes(double distance, const Substrate& substrate);

/// Rise of the centre of a disc on a half-space per watt switched on `time` [s] ago [K/W], 0 up to time 0:
/// 2 sqrt(alpha t)/(k pi a^2) [1/sqrt(pi) - ierfc(a/(2 sqrt(alpha t)))]. Carslaw and Jaeger.
/// Takes neither thickness, self_conductivity nor pulse_heating into account.
[[nodiscard]] double centre_step(double diameter, const Substrate& substrate, double time);

/// The same for the mean over the disc: 2/(pi a^2 k) times the integral of J1(l a)^2 erf(l sqrt(alpha t))/l^2
/// over l > 0. Good to 1e-9. Carslaw and Jaeger.
[[nodiscard]] double mean_step(double diameter, const Substrate& substrate, double time);

/// Rise of an emitter per watt of its own heat switched on `time` [s] ago [K/W], 0 up to time 0. Starts as
/// `pulse_heating` times the centre of the disc on the bulk and ends at the resistance `steady` [K/W],
/// usually self_resistance(); without one at that of the centre of the disc.
[[nodiscard]] double junction_step(double diameter, const Substrate& substrate, double time,
                                   std::optional<double> steady = {});

/// Rise per watt [K/W] a `time` [s] after the start of a single rectangular pulse of this width [s].
[[nodiscard]] double pulse_rise(double diameter, const Substrate& substrate, double width, double time,
                                std::optional<double> steady = {});

/// Rise per watt of heat within a pulse [K/W] at the end of a pulse of an endless train, of width tp <=
/// period Tr: D R + (1 - D) Z(Tr + tp) + Z(tp) - Z(Tr), D = tp/Tr, R = `steady` and Z = junction_step. An
/// upper bound where Z is concave, above the sum over all pulses by less than D (Z(2 Tr) - Z(Tr + tp)).
[[nodiscard]] double pulse_train_peak(double diameter, const Substrate& substrate, double width,
                                      double period, std::optional<double> steady = {});

/// How far the rise by a short pulse may lie, per watt of heat in it [K/W].
struct PulseBounds {
    double bulk = 0;    ///< centre of the disc on bulk gallium arsenide
    double mirror = 0;  ///< on a mirror stack: 3.5 W/(m K), 2e-6 m2/s (measured: Garcia, Farzaneh 2016)
    double layer = 0;   ///< all heat stays in a layer 1 um thick below the aperture
};
[[nodiscard]] PulseBounds pulse_bounds(double diameter, double width);

/// Rise on a half-space at a distance > 0 [m] per watt switched on `time` [s] ago in a point [K/W].
/// erfc(r/sqrt(4 alpha t))/(2 pi k r), Carslaw and Jaeger.
[[nodiscard]] double point_step(const Substrate& substrate, double distance, double time);

/// Rise on a half-space at a distance > 0 [m] per joule let out `time` [s] ago in a point [K/J]:
/// exp(-r^2/(4 alpha t))/(4 rho c (pi alpha t)^1.5), greatest at t = r^2/(6 alpha). Carslaw and Jaeger.
[[nodiscard]] double point_impulse(const Substrate& substrate, double distance, double time);

/// Rise [K] above a sink [K] in a material whose conductivity falls as (T/300 K)^-1.3, from the rise [K] that
/// its conductivity at 300 K would give (Kirchhoff's transformation; exponent for gallium arsenide: table
/// after Sealy 1993 and Tiwari 1992). Infinite when the material cannot carry the heat off.
[[nodiscard]] double rise_with_falling_conductivity(double rise, double sink_temperature);

/// Conductivity of Al(x)Ga(1-x)As at 300 K [W/(m K)], x from 0 to 1: Afromowitz 1973.
[[nodiscard]] double algaas_conductivity(double aluminium);

/// How far heat spreads in a time [s]: sqrt(4 alpha t) [m].
[[nodiscard]] double diffusion_length(double diffusivity, double time);

/// Slowest time constant of a slab with one cold side: (2 h/pi)^2/alpha [s].
[[nodiscard]] double chip_time_constant(double thickness, double diffusivity);

}  // namespace glint
