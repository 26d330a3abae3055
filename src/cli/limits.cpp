// glintplan limits: accessible emission limits for any wavelength, duration, subtense and repetition.
#include "cli/commands.h"

#include <glint/core/error.h>
#include <glint/core/quantity.h>
#include <glint/core/text.h>
#include <glint/report/limits_page.h>
#include <glint/safety/limits_query.h>

#include <fmt/format.h>

namespace glint::cli {
namespace {

struct Options {
    std::string wavelength, duration, subtense, repetition, pulses;
    bool json = false;
};

// Reads each option that was given; bad ones are collected, so that all are named at once.
class OptionReader {
public:
    std::vector<Problem> problems;

    double quantity(const std::string& text, const char* option, Kind kind) {
        const ParsedQuantity parsed = parse_quantity(text, kind);
        if (!parsed.problem.empty())
            problems.push_back({.what = parsed.problem,
                                .accepted = fmt::format("a {} in {}", name_of(kind), unit_list(kind)),
                                .path = option});
        return parsed.value;
    }
};

int run(const Options& options) {
    OptionReader reader;
    LimitsQuery query;
    query.wavelength = reader.quantity(options.wavelength, "--wavelength", Kind::length);
    query.duration = reader.quantity(options.duration, "--duration", Kind::time);
    if (!options.subtense.empty())
        query.subtense = reader.quantity(options.subtense, "--subtense", Kind::angle);
    if (!options.repetition.empty())
        query.repetition = reader.quantity(options.repetition, "--repetition", Kind::frequency);
    if (!options.pulses.empty()) query.pulses = reader.quantity(options.pulses, "--pulses", Kind::number);
    if (!reader.problems.empty()) throw Error(std::move(reader.problems));
    const LimitsAnswer answer = look_up_limits(query);
    fmt::print("{}", options.json ? limits_json(answer) : limits_text(answer));
    return Exit::done;
}

}  // namespace

Command add_limits(CLI::App& app) {
    const auto options = std::make_shared<Options>();
    CLI::App* command =
        app.add_subcommand("limits", "Accessible emission limits of IEC 60825-1 for one emission");
    command->add_option("--wavelength", options->wavelength, "400 nm to 1800 nm")
        ->required()
        ->type_name("LENGTH");
    command->add_option("--duration", options->duration, "Of the emission, or of one pulse")
        ->required()
        ->type_name("TIME");
    command
        ->add_option("--subtense", options->subtense,
                     "Angular subtense of the apparent source; a point (1.5 mrad) when not given")
        ->type_name("ANGLE");
    command->add_option("--repetition", options->repetition, "Of a regular train of such pulses")
        ->type_name("FREQUENCY");
    command->add_option("--pulses", options->pulses, "Number of pulses when the train ends")->type_name("N");
    command->add_flag("--json", options->json, "One JSON object instead of a table");
    command->footer("Example: glintplan limits --wavelength 905nm --duration 5ns --repetition 10kHz");
    return {command, [options] { return run(*options); }};
}

}  // namespace glint::cli
