// The tables of accessible emission limits, 400 nm to 1800 nm, as data to hold against the standard.
#pragma once

#include <glint/safety/domain.h>
#include <array>
#include <string_view>

namespace glint {

/// What a limit protects, and by that how the emission compared with it is taken.
enum class Mechanism {
    retinal_thermal,  ///< 400-1400 nm, angle of acceptance alpha_max(t)
    photochemical,    ///< 400-600 nm, angle of acceptance of its own
    corneal,          ///< 1400-1800 nm, no angle
    ceiling,          ///< the Class 3B limit, upper bound of every other class; no angle
};

/// "retinal thermal", ...
[[nodiscard]] std::string_view name_of(Mechanism);

enum class LimitUnit { joule, watt };

/// Factors that multiply the coefficient of a row.
struct Multipliers {
    bool C3 = false;
    bool C4 = false;
    bool C6 = false;
    bool C7 = false;
    bool T2 = false;  ///< T2^-0.25, T2 in s

    bool operator==(const Multipliers&) const = default;
};

/// For which sources a row holds.
enum class SourceSize {
    any,
    point,               ///< subtense up to 1.5 mrad
    extended,            ///< subtense above 1.5 mrad
    extended_to_82_mrad  ///< above 1.5 mrad up to 82 mrad
};

/// Whether a row holds for a subtense [rad].
[[nodiscard]] bool holds_for(SourceSize source, double subtense);

/// A further bound on the duration that depends on the other arguments.
enum class Reach {
    whole,
    up_to_T2,
    beyond_T2,
    up_to_60_ms_C4,  ///< to 0.06 C4 s
    beyond_60_ms_C4  ///< from 0.06 C4 s
};

/// One cell: limit = coefficient * t^exponent * multipliers, in J or W, t in s.
struct LimitRow {
    Mechanism mechanism = Mechanism::retinal_thermal;
    Interval wavelength;  ///< m
    Interval duration;    ///< s
    double coefficient = 0;
    double exponent = 0;  ///< of t
    LimitUnit unit = LimitUnit::joule;
    Multipliers times;
    SourceSize source = SourceSize::any;
    Reach reach = Reach::whole;

    bool operator==(const LimitRow&) const = default;
};

namespace limit_rows {

inline constexpr LimitUnit J = LimitUnit::joule;
inline constexpr LimitUnit W = LimitUnit::watt;
inline constexpr Multipliers none{};
inline constexpr Multipliers C3{.C3 = true};
inline constexpr Multipliers C4{.C4 = true};
inline constexpr Multipliers C6{.C6 = true};
inline constexpr Multipliers C6_C7{.C6 = true, .C7 = true};
inline constexpr Multipliers C4_C6{.C4 = true, .C6 = true};
inline constexpr Multipliers C4_C7{.C4 = true, .C7 = true};
inline constexpr Multipliers C4_C6_C7{.C4 = true, .C6 = true, .C7 = true};
inline constexpr Multipliers C6_T2{.C6 = true, .T2 = true};
inline constexpr Multipliers C4_C6_C7_T2{.C4 = true, .C6 = true, .C7 = true, .T2 = true};

inline constexpr Mechanism thermal = Mechanism::retinal_thermal;
inline constexpr Mechanism blue = Mechanism::photochemical;
inline constexpr Mechanism cornea = Mechanism::corneal;
inline constexpr Mechanism ceiling = Mechanism::ceiling;

inline constexpr SourceSize any = SourceSize::any;
inline constexpr SourceSize point = SourceSize::point;
inline constexpr SourceSize extended = SourceSize::extended;
inline constexpr SourceSize extended_to_82_mrad = SourceSize::extended_to_82_mrad;

inline constexpr Reach up_to_T2 = Reach::up_to_T2;
inline constexpr Reach beyond_T2 = Reach::beyond_T2;
inline constexpr Reach up_to_60_ms_C4 = Reach::up_to_60_ms_C4;
inline constexpr Reach beyond_60_ms_C4 = Reach::beyond_60_ms_C4;

// clang-format off

/// Class 1 and 1M. IEC 60825-1:2014 Table 3 (point source, C6 = 1) and Table 4 (extended source), from
/// memory. Confirmed by secondary sources: 18 t^0.75 J/m2 behind the 7e-4 rows, 0.39 mW at 500-700 nm, the
/// visible row beyond T2. Below 10 ps and 700-1050 nm the form without C4 is taken; it is the smaller.
inline constexpr std::array class_1{
    LimitRow{thermal, {400e-9, 1050e-9}, {1e-13, 1e-11}, 3.8e-8, 0, J, C6},
    LimitRow{thermal, {1050e-9, 1400e-9}, {1e-13, 1e-11}, 3.8e-8, 0, J, C6_C7},
    LimitRow{thermal, {400e-9, 700e-9}, {1e-11, 5e-6}, 7.7e-8, 0, J, C6},
    LimitRow{thermal, {700e-9, 1050e-9}, {1e-11, 5e-6}, 7.7e-8, 0, J, C4_C6},
    LimitRow{thermal, {1050e-9, 1400e-9}, {1e-11, 13e-6}, 7.7e-7, 0, J, C6_C7},
    LimitRow{thermal, {400e-9, 700e-9}, {5e-6, 10}, 7e-4, 0.75, J, C6},
    LimitRow{thermal, {700e-9, 1050e-9}, {5e-6, 10}, 7e-4, 0.75, J, C4_C6},
    LimitRow{thermal, {1050e-9, 1400e-9}, {13e-6, 10}, 3.5e-3, 0.75, J, C6_C7},
    LimitRow{thermal, {400e-9, 700e-9}, {10, 3e4}, 3.9e-4, 0, W, none, point},
    LimitRow{thermal, {700e-9, 1400e-9}, {10, 3e4}, 3.9e-4, 0, W, C4_C7, point},
    LimitRow{thermal, {400e-9, 700e-9}, {10, 3e4}, 7e-4, 0.75, J, C6, extended, up_to_T2},
    LimitRow{thermal, {400e-9, 700e-9}, {10, 3e4}, 7e-4, 0, W, C6_T2, extended, beyond_T2},
    LimitRow{thermal, {700e-9, 1400e-9}, {10, 3e4}, 7e-4, 0.75, J, C4_C6_C7, extended, up_to_T2},
    LimitRow{thermal, {700e-9, 1400e-9}, {10, 3e4}, 7e-4, 0, W, C4_C6_C7_T2, extended, beyond_T2},
    LimitRow{blue, {400e-9, 484e-9}, {1, 10}, 3.9e-3, 0, J, C3, extended_to_82_mrad},
    LimitRow{blue, {400e-9, 600e-9}, {10, 100}, 3.9e-3, 0, J, C3},
    LimitRow{blue, {400e-9, 600e-9}, {100, 3e4}, 3.9e-5, 0, W, C3},
    LimitRow{cornea, {1400e-9, 1500e-9}, {1e-13, 1e-9}, 8e5, 0, W, none},
    LimitRow{cornea, {1400e-9, 1500e-9}, {1e-9, 1e-3}, 8e-4, 0, J, none},
    LimitRow{cornea, {1400e-9, 1500e-9}, {1e-3, 0.35}, 4.4e-3, 0.25, J, none},
    LimitRow{cornea, {1400e-9, 1500e-9}, {0.35, 10}, 1.0e-2, 1, J, none},
    LimitRow{cornea, {1400e-9, 1500e-9}, {10, 3e4}, 1.0e-2, 0, W, none},
    LimitRow{cornea, {1500e-9, 1800e-9}, {1e-13, 1e-9}, 8e6, 0, W, none},
    LimitRow{cornea, {1500e-9, 1800e-9}, {1e-9, 0.35}, 8e-3, 0, J, none},
    LimitRow{cornea, {1500e-9, 1800e-9}, {0.35, 10}, 1.8e-2, 0.75, J, none},
    LimitRow{cornea, {1500e-9, 1800e-9}, {10, 3e4}, 1.0e-2, 0, W, none},
};

/// Class 2 and 2M from 0.25 s on; below that the Class 1 rows hold. IEC 60825-1:2014 Table 5; two secondary
/// sources.
inline constexpr std::array class_2{
    LimitRow{thermal, {400e-9, 700e-9}, {0.25, 3e4}, 1e-3, 0, W, C6},
};

/// Class 3R: five times Class 1, in 400-700 nm from 0.25 s on five times Class 2. IEC 60825-1:2014 Tables 6
/// and 7; the factor 5 from several secondary sources. Where the printed rounding (from memory) and five
/// times the Class 1 value differ the smaller stands: 3.8e-7, not 3.85e-7; 3.8e-6, not 3.85e-6; 1.75e-2, not
/// 1.8e-2; 1.95e-3, not 2.0e-3.
inline constexpr std::array class_3R{
    LimitRow{thermal, {400e-9, 1050e-9}, {1e-13, 1e-11}, 1.9e-7, 0, J, C6},
    LimitRow{thermal, {1050e-9, 1400e-9}, {1e-13, 1e-11}, 1.9e-7, 0, J, C6_C7},
    LimitRow{thermal, {400e-9, 700e-9}, {1e-11, 5e-6}, 3.8e-7, 0, J, C6},
    LimitRow{thermal, {700e-9, 1050e-9}, {1e-11, 5e-6}, 3.8e-7, 0, J, C4_C6},
    LimitRow{thermal, {1050e-9, 1400e-9}, {1e-11, 13e-6}, 3.8e-6, 0, J, C6_C7},
    LimitRow{thermal, {400e-9, 700e-9}, {5e-6, 0.25}, 3.5e-3, 0.75, J, C6},
    LimitRow{thermal, {400e-9, 700e-9}, {0.25, 3e4}, 5e-3, 0, W, C6},
    LimitRow{thermal, {700e-9, 1050e-9}, {5e-6, 10}, 3.5e-3, 0.75, J, C4_C6},
    LimitRow{thermal, {1050e-9, 1400e-9}, {13e-6, 10}, 1.75e-2, 0.75, J, C6_C7},
    LimitRow{thermal, {700e-9, 1400e-9}, {10, 3e4}, 1.95e-3, 0, W, C4_C7, point},
    LimitRow{thermal, {700e-9, 1400e-9}, {10, 3e4}, 3.5e-3, 0.75, J, C4_C6_C7, extended, up_to_T2},
    LimitRow{thermal, {700e-9, 1400e-9}, {10, 3e4}, 3.5e-3, 0, W, C4_C6_C7_T2, extended, beyond_T2},
    LimitRow{cornea, {1400e-9, 1500e-9}, {1e-13, 1e-9}, 4e6, 0, W, none},
    LimitRow{cornea, {1400e-9, 1500e-9}, {1e-9, 1e-3}, 4e-3, 0, J, none},
    LimitRow{cornea, {1400e-9, 1500e-9}, {1e-3, 0.35}, 2.2e-2, 0.25, J, none},
    LimitRow{cornea, {1400e-9, 1500e-9}, {0.35, 10}, 5e-2, 1, J, none},
    LimitRow{cornea, {1400e-9, 1500e-9}, {10, 3e4}, 5e-2, 0, W, none},
    LimitRow{cornea, {1500e-9, 1800e-9}, {1e-13, 1e-9}, 4e7, 0, W, none},
    LimitRow{cornea, {1500e-9, 1800e-9}, {1e-9, 0.35}, 4e-2, 0, J, none},
    LimitRow{cornea, {1500e-9, 1800e-9}, {0.35, 10}, 9e-2, 0.75, J, none},
    LimitRow{cornea, {1500e-9, 1800e-9}, {10, 3e4}, 5e-2, 0, W, none},
};

/// Class 3B. IEC 60825-1:2014 Table 8, from memory; 0.5 W from two secondary sources, 30 mJ visible from
/// one.
inline constexpr std::array class_3B{
    LimitRow{ceiling, {400e-9, 1050e-9}, {1e-13, 1e-9}, 3e7, 0, W, C4},
    LimitRow{ceiling, {400e-9, 1050e-9}, {1e-9, 0.25}, 0.03, 0, J, C4, any, up_to_60_ms_C4},
    LimitRow{ceiling, {400e-9, 1050e-9}, {1e-9, 0.25}, 0.5, 0, W, none, any, beyond_60_ms_C4},
    LimitRow{ceiling, {1050e-9, 1400e-9}, {1e-13, 1e-9}, 1.5e8, 0, W, none},
    LimitRow{ceiling, {1050e-9, 1400e-9}, {1e-9, 0.25}, 0.15, 0, J, none},
    LimitRow{ceiling, {1400e-9, 1800e-9}, {1e-13, 1e-9}, 1.25e8, 0, W, none},
    LimitRow{ceiling, {1400e-9, 1800e-9}, {1e-9, 0.25}, 0.125, 0, J, none},
    LimitRow{ceiling, {400e-9, 1800e-9}, {0.25, 3e4}, 0.5, 0, W, none},
};

// clang-format on

}  // namespace limit_rows
}  // namespace glint
