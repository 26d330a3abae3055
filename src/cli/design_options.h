// The options that every command on a design shares, and running a design with progress.
#pragma once

#include "cli/commands.h"

#include <glint/plan/assess.h>
#include <string>
#include <vector>

namespace glint::cli {

struct DesignOptions {
    std::string design;
    std::vector<std::string> settings;  ///< "PATH=VALUE"
    int threads = 0;                    ///< 0: all
    bool quiet = false;
};

/// Adds DESIGN, --set, --threads and --quiet.
void add_design_options(CLI::App& command, DesignOptions& options);

/// A design and what became of it.
struct AssessedDesign {
    LoadedDesign loaded;
    Assessment assessment;
};

/// Loads and assesses with progress on a terminal. Throws Error; Stopped on Ctrl-C.
[[nodiscard]] AssessedDesign assess_design(const DesignOptions& options);

/// A design and how it stands for the eye.
struct JudgedDesign {
    LoadedDesign loaded;
    SafetyVerdict verdict;
};

/// The same for eye safety alone.
[[nodiscard]] JudgedDesign judge_design(const DesignOptions& options);

}  // namespace glint::cli
