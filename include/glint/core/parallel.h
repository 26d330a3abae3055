// Parallel loops over independent work, with progress and a clean stop.
#pragma once

#include <atomic>
#include <cstddef>
#include <exception>
#include <functional>
#include <string_view>
#include <utility>

namespace glint {

/// Thrown out of a loop when the caller asked for a stop.
struct Stopped : std::exception {
    [[nodiscard]] const char* what() const noexcept override { return "stopped"; }
};

/// What a long stage may tell its caller, and be told. Both parts may be empty. Owned by the caller.
struct Progress {
    std::function<void(std::string_view stage, double share)> report;  ///< share done, 0 to 1
    const std::atomic<bool>* stop = nullptr;                           ///< true: end soon by throwing Stopped
    [[nodiscard]] bool stopping() const { return stop != nullptr && stop->load(std::memory_order_relaxed); }
};

/// Runs body(i) for i in [0, n) over the OpenMP threads. The body writes to slots of its own, so the result
/// does not depend on the number of threads. The first exception by index is rethrown after the loop ends.
/// Reports progress from one thread only. Throws Stopped when asked to stop.
template <class Body>
void parallel_for(std::size_t n, std::string_view stage, const Progress& progress, Body&& body) {
    std::atomic<std::size_t> done = 0;
    std::atomic<bool> failed = false;
    std::exception_ptr error;
    std::size_t error_index = n;
    const std::size_t chunk = n / 256 + 1;
    const std::size_t chunks = (n + chunk - 1) / chunk;
#pragma omp parallel for schedule(dynamic, 1)
    for (std::size_t c = 0; c < chunks; ++c) {
        if (progress.stopping() || failed.load(std::memory_order_relaxed)) continue;
        const std::size_t first = c * chunk, last = first + chunk < n ? first + chunk : n;
        for (std::size_t i = first; i < last; ++i) {
            try {
                body(i);
            } catch (...) {
                failed = true;
#pragma omp critical(glint_parallel_error)
                if (i < error_index) error_index = i, error = std::current_exception();
                break;
            }
        }
        const std::size_t finished = done += last - first;
        if (progress.report) {
#pragma omp critical(glint_parallel_report)
            progress.report(stage, static_cast<double>(finished) / static_cast<double>(n));
        }
    }
    if (error) std::rethrow_exception(error);
    if (progress.stopping()) throw Stopped{};
}

template <class Body>
void parallel_for(std::size_t n, Body&& body) {
    parallel_for(n, {}, Progress{}, std::forward<Body>(body));
}

}  // namespace glint
