// The assessment: everything that is known about one design after it has been worked through.
#pragma once

#include <glint/core/quantity.h>
#include <glint/design/load.h>
#include <glint/emitter/array.h>
#include <glint/emitter/chip.h>
#include <glint/emitter/dot_pattern.h>
#include <glint/emitter/firing.h>
#include <glint/emitter/order_score.h>
#include <glint/optics/beam.h>
#include <glint/optics/far_field.h>
#include <glint/ranging/landing.h>
#include <glint/ranging/reach.h>
#include <glint/ranging/returns.h>
#include <glint/safety/verdict.h>
#include <optional>
#include <string>
#include <vector>

namespace glint {

/// One requirement held against what was got.
struct RequirementResult {
    std::string name;   ///< "Range at 10 %"
    std::string path;   ///< "requirements/range"
    std::string unit;   ///< SI unit of the numbers, for keys: "m", "Hz", ...; empty for a count or a share
    double needed = 0;  ///< SI
    double got = 0;     ///< SI
    std::string needed_text;
    std::string got_text;
    std::string margin_text;  ///< "+12 %": positive when there is room
    std::string limited_by;   ///< what stands in the way of more
    bool met = false;
};

/// What one zone does: its light, and what came back from it.
struct ZoneReport {
    int emitters = 0;
    ZoneField field;
    ZoneLanding landing;
    double shot_energy = 0;   ///< in the beams [J]
    std::size_t returns = 0;  ///< pixel returns in which this zone is the strongest
    std::size_t points = 0;
    double nearest_return = 0;   ///< [m]; 0 without returns
    double farthest_return = 0;  ///< [m]
};

/// A return good enough to be a point.
struct Point {
    Vec3 position = Vec3::Zero();  ///< scene frame [m]
    int zone = 0;
    int column = 0;
    int row = 0;
    int object = 0;
    double range = 0;        ///< [m]
    double signal = 0;       ///< counts of the echo in the dwell
    double precision = 0;    ///< [m]
    double probability = 0;  ///< of detection
};

struct ReachSummary {
    double reflectance = 0;
    double probability = 0;
    double shortest = 0;  ///< [m]
    double median = 0;
    double longest = 0;
};

struct Assessment {
    EmitterArray array;
    Packing packing;
    FiringPlan plan;
    OrderScore order;                ///< of the firing order
    std::optional<DotPattern> dots;  ///< of a scattered layout
    DriverCount drivers;
    std::optional<Chip> chip;  ///< unless driven by data_sheet
    Beams beams;
    double average_power = 0;  ///< optical, of the chip [W]
    std::vector<ZoneReport> zones;
    std::vector<std::string> object_names;
    std::vector<std::size_t> points_on_object;
    Returns returns;
    std::vector<Point> points;
    std::vector<ReachSummary> reaches;  ///< one for each range requirement
    SafetyVerdict safety;
    std::vector<RequirementResult> requirements;
    std::vector<std::string>
        findings;  ///< what to mind about this design or this evaluation, whole sentences

    [[nodiscard]] bool all_met() const;
};

}  // namespace glint
