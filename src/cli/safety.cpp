// glintplan safety: accessible emission only, every rule that bears on it, and the faults.
#include "cli/commands.h"
#include "cli/design_options.h"

#include <glint/report/safety_page.h>

#include <fmt/format.h>

namespace glint::cli {
namespace {

struct Options : DesignOptions {
    bool json = false;
};

int run(const Options& options) {
    const JudgedDesign judged = judge_design(options);
    const SafetyVerdict& verdict = judged.verdict;
    if (options.json)
        fmt::print("{}", safety_json(verdict));
    else if (!options.quiet)
        fmt::print("{}", safety_text(judged.loaded.design, verdict));
    const bool met = static_cast<int>(verdict.laser_class) <= static_cast<int>(verdict.asked) &&
                     verdict.asked_ratio <= 1 - verdict.asked_margin;
    return met ? Exit::done : Exit::unmet;
}

}  // namespace

Command add_safety(CLI::App& app) {
    const auto options = std::make_shared<Options>();
    CLI::App* command = app.add_subcommand("safety", "Judge eye safety alone: class, what governs, faults");
    add_design_options(*command, *options);
    command->add_flag("--json", options->json, "One JSON object instead of a page");
    command->footer("Example: glintplan safety examples/aisle-cart.xml");
    return {command, [options] { return run(*options); }};
}

}  // namespace glint::cli
