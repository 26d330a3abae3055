// glintplan fields: what can be set, with units and ranges.
#include "cli/commands.h"

#include <glint/design/design_record.h>
#include <glint/design/reference.h>
#include <glint/scene/scene_file.h>

#include <fmt/format.h>

namespace glint::cli {
namespace {

struct Options {
    std::string path;
    bool schema = false;
    bool markdown = false;
    bool scene = false;
};

int run(const Options& options) {
    const Record& record = options.scene ? scene_record() : design_record();
    if (options.schema)
        fmt::print("{}", xml_schema(record));
    else if (options.markdown)
        fmt::print("{}", reference_markdown(record));
    else
        fmt::print("{}", reference_text(record, options.path));
    return Exit::done;
}

}  // namespace

Command add_fields(CLI::App& app) {
    const auto options = std::make_shared<Options>();
    CLI::App* command = app.add_subcommand("fields", "What a design can set, with units and ranges");
    command->add_option("path", options->path, "Only this element or field")->type_name("PATH");
    auto* schema = command->add_flag("--schema", options->schema, "An XML Schema for editors instead");
    command->add_flag("--markdown", options->markdown, "The reference of docs/fields.md instead")
        ->excludes(schema);
    command->add_flag("--scene", options->scene, "Of a scene file instead of a design");
    command->footer("Example: glintplan fields emitters/layout");
    return {command, [options] { return run(*options); }};
}

}  // namespace glint::cli
