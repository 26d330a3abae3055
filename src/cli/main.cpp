// glintplan: parses the command line, runs one command, and turns what goes wrong into a message and an exit
// status.
#include "cli/commands.h"

#include <glint/core/error.h>
#include <glint/core/parallel.h>
#include <glint/core/text.h>
#include <glint/core/version.h>
#include <glint/safety/caution.h>

#include <fmt/format.h>
#include <array>
#include <new>
#include <string>

namespace {

using namespace glint;

int explain(const Error& error) {
    for (const Problem& problem : error.problems())
        fmt::print(stderr, "glintplan: error: {}\n", to_text(problem));
    return error.blame() == Blame::input ? cli::Exit::bad_input : cli::Exit::machine;
}

int parse_and_run(int argc, char** argv) {
    CLI::App app{
        "Planner for addressable emitter arrays and flash illumination in lidar and 3D sensing.\n\n" +
        wrapped(caution_paragraph, 80)};
    app.name("glintplan");
    app.set_version_flag("--version", fmt::format("glintplan {}", version()));
    app.require_subcommand(1);
    app.footer(wrapped(
        "glintplan COMMAND --help says more. Exit status: 0 every requirement met, 1 one not met, 2 bad "
        "input, 3 the machine failed, 130 stopped.",
        80));
    const std::array commands{cli::add_assess(app), cli::add_safety(app), cli::add_preview(app),
                              cli::add_limits(app), cli::add_fields(app)};
    try {
        app.parse(argc, argv);
    } catch (const CLI::ParseError& error) {
        // Help and version go to standard output with status 0; everything else is bad usage.
        return app.exit(error) == 0 ? cli::Exit::done : cli::Exit::bad_input;
    }
    for (const cli::Command& command : commands)
        if (command.app->parsed()) return command.run();
    return cli::Exit::bad_input;
}

}  // namespace

int main(int argc, char** argv) {
    try {
        const int status = parse_and_run(argc, argv);
        // What was printed has to have arrived, or the status would lie.
        if (std::fflush(stdout) != 0) {
            fmt::print(stderr, "glintplan: error: cannot write to standard output\n");
            return cli::Exit::machine;
        }
        return status;
    } catch (const Error& error) {
        return explain(error);
    } catch (const Stopped&) {
        fmt::print(stderr, "glintplan: stopped; nothing was written\n");
        return cli::Exit::stopped;
    } catch (const std::bad_alloc&) {
        fmt::print(stderr, "glintplan: error: out of memory\n");
        return cli::Exit::machine;
    } catch (const std::exception& error) {
        fmt::print(stderr, "glintplan: error: {}\n", error.what());
        return cli::Exit::machine;
    }
}
