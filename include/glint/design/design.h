// The design as plain structs: everything the architect decides, in SI.
#pragma once

#include <filesystem>
#include <optional>
#include <string>
#include <variant>
#include <vector>

namespace glint {

enum class LayoutKind { grid, hexagonal, scattered, list };

/// Where the emitters sit on the chip.
struct Layout {
    LayoutKind kind = LayoutKind::grid;
    int rows = 1;                     ///< grid, hexagonal
    int columns = 1;                  ///< grid, hexagonal
    double pitch = 0;                 ///< centre to centre in a row [m]
    std::optional<double> row_pitch;  ///< between rows of a grid [m]; the pitch when not set
    double width = 0;                 ///< scattered: area to fill [m]
    double height = 0;                ///< scattered: area to fill [m]
    double spacing = 0;               ///< scattered: least centre distance [m]
    int seed = 1;                     ///< scattered
    std::string file;                 ///< list: CSV
    bool operator==(const Layout&) const = default;
};

enum class AddressingScheme { individual, rows, columns, blocks, interleaved, matrix, list };

/// Which emitters are wired to fire together.
struct Addressing {
    AddressingScheme scheme = AddressingScheme::blocks;
    std::optional<int> rows;     ///< zones (or lines, or phases) along the columns' direction
    std::optional<int> columns;  ///< zones (or lines, or phases) along a row
    bool operator==(const Addressing&) const = default;
};

enum class LobeShape { gaussian, ring };
enum class BeamWidth { full_1e2, half_1e2, fwhm };

/// What one emitter sends out before any optics.
struct Lobe {
    LobeShape shape = LobeShape::gaussian;
    BeamWidth width = BeamWidth::full_1e2;  ///< which width `divergence` is
    double divergence = 0;                  ///< of the Gaussian, or of the wall of the ring [rad]
    double ring = 0;                        ///< full angle across the crest of the ring [rad]
    bool operator==(const Lobe&) const = default;
};

/// The laser diode of one emitter. What is not set comes from fits to its aperture, see diode_preset().
struct DiodeSettings {
    int junctions = 1;                            ///< in series
    std::optional<double> threshold;              ///< lowest threshold current [A]
    std::optional<double> threshold_temperature;  ///< where it is lowest [K]
    std::optional<double> threshold_width;        ///< twice as high this far from there [K]
    std::optional<double> slope;                  ///< of all junctions at 25 degC [W/A]
    std::optional<double> slope_fall;             ///< rise above 25 degC at which no slope is left [K]
    std::optional<double> voltage;                ///< at zero current and 25 degC [V]
    std::optional<double> resistance;             ///< in series [ohm]
    bool operator==(const DiodeSettings&) const = default;
};

/// Where the heat of the chip goes.
struct HeatSettings {
    double sink_temperature = 298.15;     ///< [K]
    double substrate_thickness = 100e-6;  ///< [m]
    double conductivity = 46;             ///< of the substrate [W/(m K)]
    double self_conductivity = 25.5;      ///< below each emitter [W/(m K)]
    double package_resistance = 10;       ///< from the chip's far side to the sink [K/W]
    double pulse_heating = 1;             ///< factor on the heating by short pulses
    double wavelength_drift = 0.07e-9;    ///< from 25 degC on [m/K]
    bool operator==(const HeatSettings&) const = default;
};

struct Emitters {
    double wavelength = 0;  ///< at 25 degC [m]
    double aperture = 0;    ///< diameter of one emitter [m]
    std::optional<double>
        near_field_radius;  ///< 1/e2 radius at the emitter [m]; half the aperture when not set
    Layout layout;
    Addressing addressing;
    Lobe lobe;
    DiodeSettings diode;
    HeatSettings heat;
    bool operator==(const Emitters&) const = default;
};

enum class DriveBy { data_sheet, current, power };
enum class PulseShape { rectangular, half_sine, gaussian };
enum class DriverKind { ramp, resonant };

/// What drives a channel: a switch that ramps the current up through the loop, or a capacitor discharged into
/// it.
struct DriverSettings {
    DriverKind kind = DriverKind::ramp;
    double loop_inductance = 1e-9;    ///< of one channel [H]
    double loop_resistance = 0.1;     ///< without the emitters [ohm]
    std::optional<double> supply;     ///< [V]; what is needed is worked out when not set
    std::optional<double> rise_time;  ///< ramp: asked for [s]; a third of the pulse when not set
    double droop = 0.05;  ///< ramp: share of the supply that the storage capacitor may lose in a dwell
    bool operator==(const DriverSettings&) const = default;
};

/// What one emitter is driven to.
struct DriveSettings {
    DriveBy by = DriveBy::data_sheet;
    double peak_power = 0;   ///< optical, of one emitter [W]; by power: the mean over all emitters
    double current = 0;      ///< by current: peak, of one emitter [A]
    double pulse_width = 0;  ///< full width at half maximum [s]
    PulseShape shape = PulseShape::rectangular;
    DriverSettings driver;
    bool operator==(const DriveSettings&) const = default;
};

enum class FiringOrder { raster, serpentine, stride, bit_reversed, farthest_next, shuffled, best };

/// When which zone fires.
struct Firing {
    FiringOrder order = FiringOrder::raster;
    int stride = 1;              ///< stride: zones from one that fires to the next
    int seed = 1;                ///< shuffled, best
    double exposure_weight = 1;  ///< best: of each score, see OrderScore
    double heat_weight = 1;
    double spacing_weight = 1;
    int zones_at_once = 1;
    int shots = 1;                       ///< per dwell
    double repetition = 0;               ///< of the shots of a dwell [Hz]
    double gap = 0;                      ///< after each dwell [s]
    std::optional<double> frame_period;  ///< [s]; as short as the dwells allow when not set
    bool operator==(const Firing&) const = default;
};

enum class LensMapping { tangent, f_theta };

struct Lens {
    double focal_length = 0;    ///< [m]
    double clear_aperture = 0;  ///< diameter [m]
    LensMapping mapping = LensMapping::tangent;
    double defocus = 0;       ///< emitters moved away from the focal plane by this much [m]
    double blur = 0;          ///< 1/e2 half angle that aberrations add [rad]
    double transmission = 1;  ///< of the glass
    bool operator==(const Lens&) const = default;
};

enum class FieldShape { rectangle, round };

struct Diffuser {
    FieldShape shape = FieldShape::rectangle;
    double horizontal = 0;    ///< full field of a rectangle [rad]
    double vertical = 0;      ///< full field of a rectangle [rad]
    double diameter = 0;      ///< full field of a round one [rad]
    double roll_off = 0;      ///< 10-90 % width of the edge for a collimated source [rad]
    double exponent = 0;      ///< n of I ~ cos^-n inside the field
    double transmission = 1;  ///< share that leaves inside the field and its edge
    double distance = 0;      ///< behind the element before it, or the chip [m]
    bool operator==(const Diffuser&) const = default;
};

/// A grating that makes several beams of each.
struct FanOut {
    int orders_right = 1;     ///< beams side by side; odd
    int orders_up = 1;        ///< beams one above the other; odd
    double period_right = 0;  ///< of the grating across the field [m]
    double period_up = 0;     ///< and up [m]
    double efficiency =
        0.6;  ///< share of the light in all wanted orders (without the zero one when it is given)
    std::optional<double>
        zero_order;  ///< share of the light that goes straight on; as any other order when not set
    bool operator==(const FanOut&) const = default;
};

using OpticalElement = std::variant<Lens, Diffuser, FanOut>;

/// The projection optics, in the order light meets them.
struct Optics {
    std::vector<OpticalElement> elements;
    bool operator==(const Optics&) const = default;
};

struct ReceiverLens {
    double focal_length = 0;  ///< [m]
    double f_number = 0;
    LensMapping mapping = LensMapping::tangent;
    double transmission = 1;
    bool operator==(const ReceiverLens&) const = default;
};

struct Pixels {
    int columns = 0;
    int rows = 0;
    double pitch = 0;        ///< [m]
    double fill_factor = 1;  ///< share of the pixel that collects light
    bool operator==(const Pixels&) const = default;
};

struct Filter {
    double center = 0;        ///< [m]
    double width = 0;         ///< full width of the pass band [m]
    double transmission = 1;  ///< inside the band
    bool operator==(const Filter&) const = default;
};

/// Single-photon detection with a histogram of arrival times.
struct PhotonCounting {
    double efficiency = 0;       ///< photon detection efficiency of the active area
    double dark_count_rate = 0;  ///< of one pixel [Hz]
    double dead_time = 0;        ///< after each count [s]
    double jitter = 0;           ///< of detector and timing, full width at half maximum [s]
    double bin = 0;              ///< width of a histogram bin [s]
    double gate = 0;             ///< length of the histogram, as range [m]
    double false_alarm = 0.01;   ///< probability of a false detection in a pixel and dwell
    bool operator==(const PhotonCounting&) const = default;
};

struct Receiver {
    double right = 0;  ///< place of the receiver lens beside the emitter [m]
    double up = 0;     ///< [m]
    ReceiverLens lens;
    Pixels pixels;
    Filter filter;
    PhotonCounting photon_counting;
    bool operator==(const Receiver&) const = default;
};

/// Where the module stands in the scene, and which way it looks.
struct Placement {
    std::string scene;     ///< scene file
    double x = 0;          ///< [m]
    double y = 0;          ///< [m]
    double z = 0;          ///< [m]
    double heading = 0;    ///< turned to the right of +x [rad]
    double elevation = 0;  ///< looking up [rad]
    double roll = 0;       ///< clockwise seen from behind [rad]
    bool operator==(const Placement&) const = default;
};

enum class AmbientSource { none, sun, lamp };

struct Environment {
    AmbientSource source = AmbientSource::none;
    double illuminance = 0;            ///< on every surface seen [lx]
    double colour_temperature = 2856;  ///< of a filament lamp [K]
    std::optional<double> visibility;  ///< meteorological [m]; clear air when not set
    bool operator==(const Environment&) const = default;
};

/// How the eye-safety evaluation is set up.
/// How far a built module may be from its nominal values, each to both sides. The verdict is for the worst
/// corner.
struct Tolerances {
    double power = 0;         ///< share of the peak power
    double divergence = 0;    ///< share of the emitters' divergence
    double pulse_width = 0;   ///< share
    double wavelength = 0;    ///< [m]
    double focal_length = 0;  ///< share
    bool operator==(const Tolerances&) const = default;
};

enum class ElementKind { lens, fan_out, diffuser };

/// An optical element is missing, or cracked so that light passes as if it were.
struct ElementMissing {
    ElementKind element = ElementKind::lens;
    bool operator==(const ElementMissing&) const = default;
};

/// The driver of one zone does not switch off; the worst zone counts.
struct ZoneStuckOn {
    bool operator==(const ZoneStuckOn&) const = default;
};

/// Every zone fires in every dwell.
struct AllZonesAtOnce {
    bool operator==(const AllZonesAtOnce&) const = default;
};

struct PulseTooLong {
    double factor = 1;
    bool operator==(const PulseTooLong&) const = default;
};

/// The clock of the firing plan runs too fast.
struct RepetitionTooHigh {
    double factor = 1;
    bool operator==(const RepetitionTooHigh&) const = default;
};

/// More current, and with it more power, than asked for.
struct OverCurrent {
    double factor = 1;  ///< on the peak power
    bool operator==(const OverCurrent&) const = default;
};

using Fault =
    std::variant<ElementMissing, ZoneStuckOn, AllZonesAtOnce, PulseTooLong, RepetitionTooHigh, OverCurrent>;

/// Single faults to be judged, one at a time.
struct Faults {
    std::vector<Fault> list;
    bool operator==(const Faults&) const = default;
};

struct EyeSafetySettings {
    double closest_access = 0;  ///< from the chip to the closest place a person can reach [m]
    double time_base = 100;     ///< [s]
    Tolerances tolerances;
    Faults faults;
    bool operator==(const EyeSafetySettings&) const = default;
};

struct RangeRequirement {
    double distance = 0;     ///< [m]
    double reflectance = 0;  ///< of a flat target facing the module
    double probability = 0.9;
    double share = 0.8;  ///< of the receiver's pixels that must reach it
    bool operator==(const RangeRequirement&) const = default;
};

struct PrecisionRequirement {
    double limit = 0;        ///< standard deviation of the range [m]
    double distance = 0;     ///< [m]
    double reflectance = 0;  ///< of a flat target facing the module
    double share = 0.8;      ///< of the receiver's pixels that must hold it
    bool operator==(const PrecisionRequirement&) const = default;
};

struct FrameRateRequirement {
    double minimum = 0;  ///< [Hz]
    bool operator==(const FrameRateRequirement&) const = default;
};

enum class AskedClass { class_1, class_1M, class_2, class_2M, class_3R, class_3B };

struct EyeSafetyRequirement {
    AskedClass laser_class = AskedClass::class_1;
    double margin = 0;  ///< share of the limit that must stay unused
    bool operator==(const EyeSafetyRequirement&) const = default;
};

struct PointsRequirement {
    std::string object;  ///< name of an object of the scene
    int minimum = 1;
    bool operator==(const PointsRequirement&) const = default;
};

struct AveragePowerRequirement {
    double maximum = 0;  ///< optical, of the whole chip over a frame [W]
    bool operator==(const AveragePowerRequirement&) const = default;
};

using Requirement = std::variant<RangeRequirement, PrecisionRequirement, FrameRateRequirement,
                                 EyeSafetyRequirement, PointsRequirement, AveragePowerRequirement>;

struct Requirements {
    std::vector<Requirement> list;
    bool operator==(const Requirements&) const = default;
};

/// How finely the models sample.
struct Sampling {
    int rays_per_pixel = 16;
    int rays_per_beam = 64;
    double point_probability = 0.5;  ///< least detection probability of a return that becomes a point
    int seed = 1;
    bool operator==(const Sampling&) const = default;
};

struct Design {
    std::string name;
    std::string note;
    Emitters emitters;
    DriveSettings drive;
    Firing firing;
    Optics optics;
    Receiver receiver;
    Placement placement;
    Environment environment;
    EyeSafetySettings eye_safety;
    Requirements requirements;
    Sampling sampling;
    bool operator==(const Design&) const = default;
};

}  // namespace glint
