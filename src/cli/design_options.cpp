// The options that every command on a design shares, and running a design with progress.
#include "cli/design_options.h"

#include "cli/terminal.h"

#include <omp.h>

namespace glint::cli {

void add_design_options(CLI::App& command, DesignOptions& options) {
    command.add_option("design", options.design, "Design file")->required()->type_name("DESIGN.xml");
    command
        .add_option("--set", options.settings,
                    "Set a field for this run, e.g. drive/pulse_width=\"3 ns\"; may be given again; an empty "
                    "value takes a field back")
        ->type_name("PATH=VALUE")
        ->allow_extra_args(false);
    command.add_option("--threads", options.threads, "Threads to use; all when not given")
        ->check(CLI::Range(1, 1024))
        ->type_name("N");
    command.add_flag("--quiet", options.quiet, "No progress and no verdict on the terminal");
}

namespace {

LoadedDesign load(const DesignOptions& options) {
    if (options.threads > 0) omp_set_num_threads(options.threads);
    std::vector<Setting> settings;
    for (const std::string& text : options.settings) settings.push_back(parse_setting(text));
    return load_design(options.design, settings);
}

}  // namespace

AssessedDesign assess_design(const DesignOptions& options) {
    AssessedDesign result{.loaded = load(options), .assessment = {}};
    const TerminalProgress terminal(!options.quiet);
    result.assessment = assess(result.loaded, terminal.progress());
    return result;
}

JudgedDesign judge_design(const DesignOptions& options) {
    JudgedDesign result{.loaded = load(options), .verdict = {}};
    const TerminalProgress terminal(!options.quiet);
    result.verdict = assess_safety(result.loaded, terminal.progress());
    return result;
}

}  // namespace glint::cli
