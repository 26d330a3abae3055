// Running the program as a user does, and small designs to run it on.
#pragma once

#include <filesystem>
#include <string>

namespace glint::test {

/// What a run printed and how it ended.
struct Run {
    int status = -1;
    std::string out;
    std::string err;
};

/// Runs a shell command line; "glintplan" in it stands for the program under test.
[[nodiscard]] Run run(const std::string& command);

/// A folder of one test, removed with everything in it.
class Folder {
public:
    Folder();
    ~Folder();
    Folder(const Folder&) = delete;
    Folder& operator=(const Folder&) = delete;

    /// Writes a file into the folder and returns its whole path.
    std::string write(const std::string& name, const std::string& content) const;
    [[nodiscard]] std::string path(const std::string& name = "") const;

private:
    std::filesystem::path path_;
};

/// A small design that is worked through in a fraction of a second, and its scene.
extern const char* const small_design;
extern const char* const small_scene;

/// The text with the first `from` replaced; fails the test when it does not occur.
[[nodiscard]] std::string replaced(std::string text, const std::string& from, const std::string& to);

[[nodiscard]] bool holds(const std::string& text, const std::string& part);

}  // namespace glint::test
