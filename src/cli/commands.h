// The commands of glintplan: each parses its own options into a struct and runs to an exit status.
#pragma once

#include <CLI/CLI.hpp>
#include <functional>

namespace glint::cli {

/// Exit status of the program.
enum Exit : int {
    done = 0,       ///< and every requirement met
    unmet = 1,      ///< done, a requirement not met
    bad_input = 2,  ///< bad input or usage
    machine = 3,    ///< the machine failed
    stopped = 130,  ///< Ctrl-C
};

/// A command added to the app; `run` is called when it was chosen.
struct Command {
    CLI::App* app = nullptr;
    std::function<int()> run;
};

[[nodiscard]] Command add_assess(CLI::App& app);
[[nodiscard]] Command add_safety(CLI::App& app);
[[nodiscard]] Command add_preview(CLI::App& app);
[[nodiscard]] Command add_limits(CLI::App& app);
[[nodiscard]] Command add_fields(CLI::App& app);

}  // namespace glint::cli
