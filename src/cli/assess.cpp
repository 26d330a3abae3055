// glintplan assess: one design into a verdict, tables and pictures.
#include "cli/commands.h"
#include "cli/design_options.h"

#include <glint/core/files.h>
#include <glint/report/ply.h>
#include <glint/report/png.h>
#include <glint/report/previews.h>
#include <glint/report/tables.h>

#include <fmt/format.h>

namespace glint::cli {
namespace {

struct Options : DesignOptions {
    std::string out;
};

int run(const Options& options) {
    const AssessedDesign done_with = assess_design(options);
    const Design& design = done_with.loaded.design;
    const Assessment& assessment = done_with.assessment;
    if (!options.out.empty()) {
        std::vector<OutputFile> files{{"summary.json", summary_json(design, assessment)},
                                      {"zones.csv", zones_csv(assessment)},
                                      {"points.ply", points_ply(assessment.points, assessment.object_names)}};
        for (const View& view : views())
            if (drawable(view, assessment))
                files.push_back({"preview-" + view.name + ".png", png(view.draw(design, assessment))});
        write_files(options.out, files);
    }
    if (!options.quiet) fmt::print("{}", verdict_text(design, assessment));
    if (!options.quiet && !options.out.empty()) fmt::print("Written to {}.\n", options.out);
    return assessment.all_met() ? Exit::done : Exit::unmet;
}

}  // namespace

Command add_assess(CLI::App& app) {
    const auto options = std::make_shared<Options>();
    CLI::App* command = app.add_subcommand("assess", "Work a design through and say what it reaches");
    add_design_options(*command, *options);
    command
        ->add_option("--out", options->out, "Folder for summary.json, zones.csv, points.ply and the pictures")
        ->type_name("DIR");
    command->footer("Example: glintplan assess examples/aisle-cart.xml --out out/aisle");
    return {command, [options] { return run(*options); }};
}

}  // namespace glint::cli
