// Text of problems and errors.
#include <glint/core/error.h>

namespace glint {

std::string to_text(const Problem& problem) {
    std::string text;
    if (!problem.file.empty()) {
        text += problem.file + ":";
        if (problem.line > 0) text += std::to_string(problem.line) + ":";
        text += " ";
    }
    if (!problem.path.empty()) text += problem.path + ": ";
    text += problem.what;
    if (!problem.accepted.empty()) text += "; accepted: " + problem.accepted;
    return text;
}

Error::Error(Problem problem, Blame blame) : Error(std::vector<Problem>{std::move(problem)}, blame) {}

Error::Error(std::vector<Problem> problems, Blame blame) : problems_(std::move(problems)), blame_(blame) {
    for (const Problem& problem : problems_) {
        if (!text_.empty()) text_ += "\n";
        text_ += to_text(problem);
    }
}

Error named_by(const Error& error, std::string what, std::string path) {
    std::vector<Problem> problems{{.what = std::move(what), .path = std::move(path)}};
    problems.insert(problems.end(), error.problems().begin(), error.problems().end());
    return Error(std::move(problems), error.blame());
}

}  // namespace glint
