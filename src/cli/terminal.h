// Progress on the terminal and a clean stop on Ctrl-C.
#pragma once

#include <glint/core/parallel.h>

#include <chrono>
#include <memory>

namespace glint::cli {

/// While it lives, Ctrl-C asks the work to stop, and, when wanted and standard error is a terminal, one line
/// there shows the stage, the share done and the time left.
class TerminalProgress {
public:
    explicit TerminalProgress(bool show);
    ~TerminalProgress();
    TerminalProgress(const TerminalProgress&) = delete;
    TerminalProgress& operator=(const TerminalProgress&) = delete;

    [[nodiscard]] const Progress& progress() const { return progress_; }

private:
    struct Line;
    std::unique_ptr<Line> line_;
    Progress progress_;
};

}  // namespace glint::cli
