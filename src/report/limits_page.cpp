// Prints the answer of the limit tables, for programs and for people.
#include <glint/core/quantity.h>
#include <glint/report/limits_page.h>
#include <glint/safety/caution.h>

#include <fmt/format.h>
#include <nlohmann/json.hpp>
#include <string_view>

namespace glint {
namespace {

constexpr std::size_t page_width = 80;

nlohmann::ordered_json number_or_null(const std::optional<double>& value) {
    return value ? nlohmann::ordered_json(*value) : nlohmann::ordered_json(nullptr);
}

// Breaks at blanks; `first` stands before the first line and as many blanks before every other.
std::string wrapped(std::string_view first, std::string_view text) {
    std::string page;
    std::string line(first);
    bool empty = true;
    while (!text.empty()) {
        const std::size_t end = std::min(text.find(' '), text.size());
        const std::string_view word = text.substr(0, end);
        text.remove_prefix(std::min(end + 1, text.size()));
        if (!empty && line.size() + 1 + word.size() > page_width) {
            page += line + "\n";
            line.assign(first.size(), ' ');
            empty = true;
        }
        if (!empty) line += ' ';
        line += word;
        empty = false;
    }
    return page + line + "\n";
}

std::string line_of(std::string_view name, std::string_view value) {
    return fmt::format("  {:<24}{}\n", name, value);
}

std::string shown(const std::optional<double>& value, Kind kind) {
    return value ? show_quantity(*value, kind, 5) : "does not apply";
}

// The unit the standard uses for subtenses, whatever their size.
std::string milliradians(double angle) { return fmt::format("{:.6g} mrad", angle * 1e3); }

std::string limit_lines(std::string_view name, const Limit& limit) {
    return fmt::format("  {:<24}{:<16}{}\n", name, show_quantity(limit.energy, Kind::energy, 5),
                       show_quantity(limit.power, Kind::power, 5)) +
           wrapped("      ", describe(*limit.row));
}

std::string train_lines(const TrainLimits& train) {
    std::string page = "\nPulse train, Class 1, energy per pulse\n";
    page += line_of("N", fmt::format("{:.6g}", train.N));
    page += line_of("C5", train.C5 ? fmt::format("{:.5g}", *train.C5) : "does not apply");
    page += line_of("single pulse", shown(train.single, Kind::energy));
    page += line_of("average", shown(train.average, Kind::energy) + " over " +
                                   show_quantity(train.average_window, Kind::time, 5));
    page += line_of("group within Ti", shown(train.group, Kind::energy));
    page += line_of("train", shown(train.train, Kind::energy));
    page += line_of("governed by", name_of(train.governs));
    return page;
}

}  // namespace

std::string limits_json(const LimitsAnswer& answer) {
    nlohmann::ordered_json json;
    json["caution"] = caution_paragraph;
    json["wavelength_m"] = answer.query.wavelength;
    json["duration_s"] = answer.query.duration;
    json["subtense_rad"] = answer.query.subtense;
    json["C4"] = number_or_null(answer.C4);
    json["C6"] = number_or_null(answer.C6);
    json["C7"] = number_or_null(answer.C7);
    json["T2_s"] = number_or_null(answer.T2);
    json["alpha_max_rad"] = number_or_null(answer.alpha_max);
    json["class1_energy_J"] = answer.class_1.energy;
    json["class1_power_W"] = answer.class_1.power;
    json["class1_row"] = describe(*answer.class_1.row);
    if (answer.class_2) json["class2_energy_J"] = answer.class_2->energy;
    json["class3R_energy_J"] = answer.class_3R.energy;
    json["class3B_energy_J"] = answer.class_3B.energy;
    if (answer.train) {
        const TrainLimits& train = *answer.train;
        json["repetition_Hz"] = number_or_null(answer.query.repetition);
        json["pulses"] = number_or_null(answer.query.pulses);
        json["N"] = train.N;
        json["C5"] = number_or_null(train.C5);
        json["single_energy_J"] = train.single;
        json["average_energy_J"] = train.average;
        json["average_window_s"] = train.average_window;
        json["group_energy_J"] = number_or_null(train.group);
        json["train_energy_J"] = number_or_null(train.train);
        json["governs"] = name_of(train.governs);
    }
    json["notes"] = answer.notes;
    return json.dump(2) + "\n";
}

std::string limits_text(const LimitsAnswer& answer) {
    const LimitsQuery& query = answer.query;
    std::string page = wrapped("", caution_paragraph);
    page += "\nEmission\n";
    page += line_of("wavelength", fmt::format("{:.6g} nm", query.wavelength * 1e9));
    page += line_of("duration", show_quantity(query.duration, Kind::time, 6));
    page += line_of("angular subtense", milliradians(query.subtense));
    if (query.repetition) page += line_of("repetition", show_quantity(*query.repetition, Kind::frequency, 6));
    if (query.pulses) page += line_of("pulses", fmt::format("{:.17g}", *query.pulses));
    page += "\nFactors\n";
    page += line_of("C4", shown(answer.C4, Kind::number));
    page += line_of("C6", shown(answer.C6, Kind::number));
    page += line_of("C7", shown(answer.C7, Kind::number));
    page += line_of("T2", shown(answer.T2, Kind::time));
    page += line_of("alpha_max", answer.alpha_max ? milliradians(*answer.alpha_max) : "does not apply");
    page += "\nAccessible emission limits\n";
    page += limit_lines("Class 1", answer.class_1);
    if (answer.class_2) page += limit_lines("Class 2", *answer.class_2);
    page += limit_lines("Class 3R", answer.class_3R);
    page += limit_lines("Class 3B", answer.class_3B);
    if (answer.train) page += train_lines(*answer.train);
    if (!answer.notes.empty()) page += "\nNotes\n";
    for (const std::string& note : answer.notes) page += wrapped("  - ", note);
    return page;
}

}  // namespace glint
