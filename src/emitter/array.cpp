// Layout and addressing put together into the emitter array.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/emitter/array.h>
#include <glint/emitter/layout.h>

#include <fmt/format.h>
#include <algorithm>
#include <cmath>
#include <numeric>

namespace glint {
namespace {

Places2d place(const Layout& layout, const std::filesystem::path& folder) {
    switch (layout.kind) {
        case LayoutKind::grid:
            return grid_layout(layout);
        case LayoutKind::hexagonal:
            return hexagonal_layout(layout);
        case LayoutKind::scattered:
            return scattered_layout(layout);
        case LayoutKind::list:
            try {
                return list_layout(folder / layout.file);
            } catch (const Error& error) {
                throw named_by(error, "the list " + layout.file + " cannot be used", "emitters/layout/file");
            }
    }
    return {};
}

struct Wiring {
    std::vector<int> zone_of;
    int rows = 0, columns = 0, zones = 0;
};

// Blocks of a layout without rows: tiles of the bounding rectangle. Tiles without an emitter are no zones.
Wiring tiles(const Places2d& places, int rows, int columns) {
    Vec2 low = places.positions.front(), high = low;
    for (const Vec2& p : places.positions) low = low.cwiseMin(p), high = high.cwiseMax(p);
    const auto tile = [](double share, int count) {
        return std::clamp(static_cast<int>(share * count), 0, count - 1);
    };
    Wiring wiring;
    for (const Vec2& p : places.positions) {
        const double across = high.x() > low.x() ? (p.x() - low.x()) / (high.x() - low.x()) : 0;
        const double down = high.y() > low.y() ? (high.y() - p.y()) / (high.y() - low.y()) : 0;
        wiring.zone_of.push_back(tile(down, rows) * columns + tile(across, columns));
    }
    std::vector<int> number(static_cast<std::size_t>(rows) * columns, -1);
    for (const int zone : wiring.zone_of) number[zone] = 0;
    for (int& n : number)
        if (n == 0) n = wiring.zones++;
    if (wiring.zones == rows * columns) wiring.rows = rows, wiring.columns = columns;
    for (int& zone : wiring.zone_of) zone = number[zone];
    return wiring;
}

Wiring wire(const Addressing& addressing, const Places2d& places) {
    const int rows = places.rows, columns = places.columns;
    // zone = f(row, column) on a raster of emitters
    const auto raster = [&](int zone_rows, int zone_columns, auto zone) {
        Wiring wiring{
            .zone_of = {}, .rows = zone_rows, .columns = zone_columns, .zones = zone_rows * zone_columns};
        for (int r = 0; r < rows; ++r)
            for (int c = 0; c < columns; ++c) wiring.zone_of.push_back(zone(r, c));
        return wiring;
    };
    const auto blocks = [&](int zone_rows, int zone_columns) {
        return raster(zone_rows, zone_columns, [&](int r, int c) {
            return r / (rows / zone_rows) * zone_columns + c / (columns / zone_columns);
        });
    };
    const int count = static_cast<int>(places.positions.size());
    switch (addressing.scheme) {
        case AddressingScheme::individual: {
            Wiring wiring{.zone_of = std::vector<int>(places.positions.size()),
                          .rows = rows,
                          .columns = columns,
                          .zones = count};
            std::iota(wiring.zone_of.begin(), wiring.zone_of.end(), 0);
            return wiring;
        }
        case AddressingScheme::rows:
            return blocks(addressing.rows.value_or(rows), 1);
        case AddressingScheme::columns:
            return blocks(1, addressing.columns.value_or(columns));
        case AddressingScheme::matrix:
            return blocks(addressing.rows.value_or(rows), addressing.columns.value_or(columns));
        case AddressingScheme::blocks: {
            const int zone_rows = addressing.rows.value_or(1), zone_columns = addressing.columns.value_or(1);
            return rows > 0 ? blocks(zone_rows, zone_columns) : tiles(places, zone_rows, zone_columns);
        }
        case AddressingScheme::interleaved: {
            const int phase_rows = addressing.rows.value_or(1),
                      phase_columns = addressing.columns.value_or(1);
            return raster(phase_rows, phase_columns,
                          [&](int r, int c) { return r % phase_rows * phase_columns + c % phase_columns; });
        }
        case AddressingScheme::list: {
            if (places.zones.empty())
                throw Error(Problem{.what = "the emitter list names no zones",
                                    .accepted = "a column zone",
                                    .path = "emitters/layout/file"});
            Wiring wiring{.zone_of = places.zones};
            wiring.zones = 1 + *std::ranges::max_element(places.zones);
            return wiring;
        }
    }
    return {};
}

}  // namespace

FieldSense field_sense(const Optics& optics) {
    for (const OpticalElement& element : optics.elements)
        if (std::holds_alternative<Lens>(element)) return FieldSense::inverted;
    return FieldSense::upright;
}

EmitterArray build_array(const Emitters& emitters, FieldSense sense, const std::filesystem::path& folder) {
    const Layout& layout = emitters.layout;
    if (static_cast<double>(layout.rows) * layout.columns > 4e6)
        throw Error(Problem{
            .what = "millions of emitters", .accepted = "at most 4 million", .path = "emitters/layout/rows"});
    Places2d places = place(layout, folder);
    const double nearest = nearest_distance(places.positions);
    if (places.positions.size() > 1 && nearest < emitters.aperture * (1 - 1e-9))
        throw Error(Problem{.what = fmt::format("emitters of {} sit only {} apart and would overlap",
                                                show_quantity(emitters.aperture, Kind::length),
                                                show_quantity(nearest, Kind::length)),
                            .accepted = "an aperture up to the distance of neighbours",
                            .path = "emitters/aperture"});
    Wiring wiring = wire(emitters.addressing, places);
    EmitterArray array{.positions = std::move(places.positions),
                       .zone_of = std::move(wiring.zone_of),
                       .zones = wiring.zones,
                       .zone_rows = wiring.rows,
                       .zone_columns = wiring.columns,
                       .rows = places.rows,
                       .columns = places.columns};
    if (sense == FieldSense::inverted)
        for (Vec2& p : array.positions) p = -p;
    return array;
}

ZoneMembers members_of(const EmitterArray& array) {
    ZoneMembers zones;
    zones.first.assign(static_cast<std::size_t>(array.zones) + 1, 0);
    for (const int zone : array.zone_of) ++zones.first[zone + 1];
    std::partial_sum(zones.first.begin(), zones.first.end(), zones.first.begin());
    zones.members.resize(array.size());
    std::vector<int> next(zones.first.begin(), zones.first.end() - 1);
    for (std::size_t i = 0; i < array.size(); ++i)
        zones.members[next[array.zone_of[i]]++] = static_cast<int>(i);
    return zones;
}

Packing packing(const Emitters& emitters, const EmitterArray& array) {
    const Layout& layout = emitters.layout;
    const double count = static_cast<double>(array.size());
    Packing result;
    switch (layout.kind) {
        case LayoutKind::grid:
            result.area = count * layout.pitch * layout.row_pitch.value_or(layout.pitch);
            break;
        case LayoutKind::hexagonal:
            result.area = count * layout.pitch * layout.pitch * std::sqrt(3.0) / 2;
            break;
        case LayoutKind::scattered:
            result.area = layout.width * layout.height;
            break;
        case LayoutKind::list: {
            Vec2 low = array.positions.front(), high = low;
            for (const Vec2& p : array.positions) low = low.cwiseMin(p), high = high.cwiseMax(p);
            const Vec2 size = high - low + Vec2::Constant(emitters.aperture);
            result.area = size.x() * size.y();
            break;
        }
    }
    result.density = count / result.area;
    result.fill = count * pi * emitters.aperture * emitters.aperture / (4 * result.area);
    result.nearest = nearest_distance(array.positions);
    return result;
}

}  // namespace glint
