// How the functions of this room refuse a value: one Error with one Problem.
#pragma once

#include <glint/core/error.h>
#include <string>
#include <utility>

namespace glint {

/// Throws Error with what is wrong and what would be accepted.
[[noreturn]] inline void refuse(std::string what, std::string accepted) {
    Problem problem;
    problem.what = std::move(what);
    problem.accepted = std::move(accepted);
    throw Error(std::move(problem));
}

}  // namespace glint
