// Progress on the terminal and a clean stop on Ctrl-C.
#include "cli/terminal.h"

#include <fmt/format.h>
#include <unistd.h>
#include <atomic>
#include <csignal>
#include <string>

namespace glint::cli {
namespace {

// A signal handler can reach nothing but a global.
std::atomic<bool> stop_asked = false;

void ask_to_stop(int) { stop_asked = true; }

}  // namespace

struct TerminalProgress::Line {
    using Clock = std::chrono::steady_clock;
    std::string stage;
    Clock::time_point stage_start = Clock::now();
    Clock::time_point shown{};
    bool on_screen = false;

    void show(std::string_view now, double share) {
        const auto time = Clock::now();
        if (now != stage) stage = now, stage_start = time;
        if (time - shown < std::chrono::milliseconds(100)) return;
        shown = time;
        const double spent = std::chrono::duration<double>(time - stage_start).count();
        const std::string left =
            share > 0.02 && spent > 0.5 ? fmt::format(", {:.0f} s left", spent * (1 - share) / share) : "";
        fmt::print(stderr, "\r\033[K{} {:.0f} %{}", stage, 100 * share, left);
        std::fflush(stderr);
        on_screen = true;
    }

    ~Line() {
        if (on_screen) fmt::print(stderr, "\r\033[K");
    }
};

TerminalProgress::TerminalProgress(bool show) : line_(std::make_unique<Line>()) {
    stop_asked = false;
    std::signal(SIGINT, ask_to_stop);
    std::signal(SIGTERM, ask_to_stop);
    progress_.stop = &stop_asked;
    if (show && ::isatty(STDERR_FILENO) == 1)
        progress_.report = [line = line_.get()](std::string_view stage, double share) {
            line->show(stage, share);
        };
}

TerminalProgress::~TerminalProgress() {
    std::signal(SIGINT, SIG_DFL);
    std::signal(SIGTERM, SIG_DFL);
}

}  // namespace glint::cli
