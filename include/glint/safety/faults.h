// Single faults: what each does to the class, and how fast the light must be cut so that it holds.
#pragma once

#include <glint/safety/verdict.h>

namespace glint {

/// "lens missing or cracked", "a zone stuck on", "pulses 10 times too long", ...
[[nodiscard]] std::string name_of(const Fault& fault);

/// Light while a fault lasts. A zone stuck on shines for `lasting` [s]; the others fire on. Pulses that a
/// fault makes longer than their period, or brings closer than their width, follow each other without a gap.
[[nodiscard]] LightSource faulty_light(const Design& design, const EmitterArray& array, const Fault& fault,
                                       double lasting);

/// Judges one fault of a design that has its tolerances used up. `asked` must hold, for every duration up to
/// the moment of darkness; emission before the fault is not counted. The search is a coarse one, with an
/// allowance of 10.5 %. The reaction time is found to 2 % and rounded down.
[[nodiscard]] FaultVerdict judge_fault(const Design& design, const EmitterArray& array, const Fault& fault,
                                       LaserClass asked, const Progress& progress = {});

}  // namespace glint
