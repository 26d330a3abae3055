// glintplan preview: one picture of a design.
#include "cli/commands.h"
#include "cli/design_options.h"

#include <glint/core/files.h>
#include <glint/core/text.h>
#include <glint/report/png.h>
#include <glint/report/previews.h>

namespace glint::cli {
namespace {

struct Options : DesignOptions {
    std::string view;
    std::string out;
};

int run(const Options& options) {
    const View* chosen = nullptr;
    std::vector<std::string> names;
    for (const View& view : views()) {
        names.push_back(view.name);
        if (view.name == options.view) chosen = &view;
    }
    if (chosen == nullptr)
        throw Error(Problem{
            .what = "there is no view '" + options.view + "'", .accepted = join_or(names), .path = "--view"});
    const AssessedDesign done_with = assess_design(options);
    if (!drawable(*chosen, done_with.assessment))
        throw Error(Problem{.what = "the view " + chosen->name +
                                    " shows what a diode does, but the design is driven by data_sheet",
                            .accepted = "drive by=\"current\" or by=\"power\", or another view",
                            .path = "drive/by"});
    write_file(options.out, png(chosen->draw(done_with.loaded.design, done_with.assessment)));
    return Exit::done;
}

}  // namespace

Command add_preview(CLI::App& app) {
    const auto options = std::make_shared<Options>();
    CLI::App* command = app.add_subcommand("preview", "Draw one picture of a design");
    add_design_options(*command, *options);
    std::string help = "What to draw:";
    for (const View& view : views()) help += " " + view.name + " (" + view.help + ");";
    command->add_option("--view", options->view, help)->required()->type_name("VIEW");
    command->add_option("--out", options->out, "Picture to write")->required()->type_name("FILE.png");
    command->footer("Example: glintplan preview examples/aisle-cart.xml --view zones --out zones.png");
    return {command, [options] { return run(*options); }};
}

}  // namespace glint::cli
