// The list layout: places, and zones if wanted, from a CSV file.
#include <glint/core/error.h>
#include <glint/core/files.h>
#include <glint/core/quantity.h>
#include <glint/core/text.h>
#include <glint/emitter/layout.h>

#include <fmt/format.h>
#include <set>

namespace glint {
namespace {

constexpr std::size_t most_emitters = 4'000'000;

struct Columns {
    int x = -1, y = -1, zone = -1;
    std::string x_unit, y_unit;
};

// "x_um" -> unit "um"; empty when the name is not that column.
std::string unit_in(std::string_view name, std::string_view column) {
    if (!name.starts_with(column) || name.size() < column.size() + 2 || name[column.size()] != '_') return {};
    const std::string unit(name.substr(column.size() + 1));
    return parse_quantity("1 " + unit, Kind::length).problem.empty() ? unit : std::string{};
}

}  // namespace

Places2d list_layout(const std::filesystem::path& file) {
    const std::string content = read_file(file);
    std::vector<Problem> problems;
    const auto complain = [&](std::string what, std::string accepted, int line) {
        problems.push_back(
            {.what = std::move(what), .accepted = std::move(accepted), .file = file.string(), .line = line});
    };
    Places2d places;
    Columns columns;
    std::set<std::pair<double, double>> seen;
    int line = 0, most_zone = -1;
    bool header = true;
    for (const std::string_view row : split(content, '\n')) {
        ++line;
        if (row.empty() || row.starts_with('#')) continue;
        const auto cells = split(row, ',');
        if (header) {
            header = false;
            for (int c = 0; c < static_cast<int>(cells.size()); ++c) {
                if (const std::string unit = unit_in(cells[c], "x"); !unit.empty())
                    columns.x = c, columns.x_unit = unit;
                else if (const std::string unit_y = unit_in(cells[c], "y"); !unit_y.empty())
                    columns.y = c, columns.y_unit = unit_y;
                else if (cells[c] == "zone")
                    columns.zone = c;
                else
                    complain(fmt::format("unknown column '{}'", cells[c]),
                             "x_um, y_um (or _nm, _mm, _m), zone", line);
            }
            if (columns.x < 0 || columns.y < 0)
                complain("the header lacks a column", "x_um and y_um (or _nm, _mm, _m)", line);
            if (!problems.empty()) break;
            continue;
        }
        const int needed = std::max({columns.x, columns.y, columns.zone}) + 1;
        if (static_cast<int>(cells.size()) != needed) {
            complain(fmt::format("{} values where the header names {}", cells.size(), needed),
                     "one value a column", line);
            continue;
        }
        const auto length = [&](int column, const std::string& unit) {
            const ParsedQuantity parsed =
                parse_quantity(fmt::format("{} {}", cells[column], unit), Kind::length);
            if (!parsed.problem.empty() || std::abs(parsed.value) > 0.1)
                complain(fmt::format("'{}' is no place on a chip", cells[column]),
                         "a number, at most 100 mm from the middle", line);
            return parsed.value;
        };
        const Vec2 p(length(columns.x, columns.x_unit), length(columns.y, columns.y_unit));
        if (columns.zone >= 0) {
            const ParsedNumber zone = parse_number(cells[columns.zone]);
            if (!zone.good || zone.value < 0 || zone.value >= most_emitters ||
                zone.value != std::floor(zone.value))
                complain(fmt::format("'{}' is no zone number", cells[columns.zone]), "a whole number from 0",
                         line);
            places.zones.push_back(static_cast<int>(zone.value));
            most_zone = std::max(most_zone, places.zones.back());
        }
        if (!seen.emplace(p.x(), p.y()).second)
            complain("two emitters at one place", "each place once", line);
        places.positions.push_back(p);
        if (places.positions.size() > most_emitters) complain("too many emitters", "at most 4 million", line);
        if (problems.size() >= 20) break;  // a wrong file would fill the screen
    }
    if (problems.empty() && places.positions.empty())
        complain("no emitter in the list", "a header row and one row an emitter", line);
    if (problems.empty() && most_zone >= 0) {
        std::vector<char> used(static_cast<std::size_t>(most_zone) + 1, 0);
        for (const int zone : places.zones) used[zone] = 1;
        for (int zone = 0; zone <= most_zone; ++zone)
            if (!used[zone]) {
                complain(fmt::format("zone {} has no emitter, but zone {} is named", zone, most_zone),
                         "zones numbered from 0 without gaps", 0);
                break;
            }
    }
    if (!problems.empty()) throw Error(std::move(problems));
    return places;
}

}  // namespace glint
