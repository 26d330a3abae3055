// The one error type: what is wrong, where, and what would be accepted.
#pragma once

#include <exception>
#include <string>
#include <utility>
#include <vector>

namespace glint {

/// One thing that is wrong with the input, or one thing the machine refused.
struct Problem {
    std::string what;      ///< the fault in one clause, e.g. "unknown field 'ptich'"
    std::string accepted;  ///< what would be accepted, e.g. "a length from 100 nm to 10 mm"; may be empty
    std::string path;      ///< field path such as emitters/layout/pitch; may be empty
    std::string file;      ///< file the fault is in; may be empty
    int line = 0;          ///< 1-based line in `file`, 0 when unknown

    bool operator==(const Problem&) const = default;
};

/// One problem as text: "file:line: path: what; accepted: ...". Parts that are unknown are left out.
[[nodiscard]] std::string to_text(const Problem&);

/// Who has to act: the person who wrote the input, or whoever looks after the machine.
enum class Blame { input, machine };

/// Thrown by every stage that cannot go on. Carries ALL problems found, never only the first.
class Error : public std::exception {
public:
    explicit Error(Problem problem, Blame blame = Blame::input);
    explicit Error(std::vector<Problem> problems, Blame blame = Blame::input);

    [[nodiscard]] const std::vector<Problem>& problems() const { return problems_; }
    [[nodiscard]] Blame blame() const { return blame_; }
    [[nodiscard]] const char* what() const noexcept override { return text_.c_str(); }

private:
    std::vector<Problem> problems_;
    Blame blame_;
    std::string text_;  // every problem on its own line
};

/// The same error with a first problem put before the others: which field named the file that they are in.
[[nodiscard]] Error named_by(const Error& error, std::string what, std::string path);

}  // namespace glint
