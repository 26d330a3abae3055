// Files appear all at once or not at all.
#include <glint/core/error.h>
#include <glint/core/files.h>

#include <doctest/doctest.h>
#include <unistd.h>
#include <fstream>

using namespace glint;
namespace fs = std::filesystem;

namespace {

// A folder of this test's own, removed at the end.
struct Folder {
    fs::path path = fs::temp_directory_path() / ("glint-files-" + std::to_string(::getpid()));
    Folder() { fs::create_directories(path); }
    ~Folder() { fs::remove_all(path); }
};

int entries(const fs::path& folder) {
    int count = 0;
    for ([[maybe_unused]] const auto& entry : fs::directory_iterator(folder)) ++count;
    return count;
}

}  // namespace

TEST_CASE("a set of files is written, replaced, and leaves no temporaries") {
    const Folder folder;
    const fs::path out = folder.path / "a" / "b";
    write_files(out, {{"one.txt", "1"}, {"two.txt", "22"}});
    CHECK(read_file(out / "two.txt") == "22");
    write_files(out, {{"one.txt", "new"}});
    CHECK(read_file(out / "one.txt") == "new");
    CHECK(read_file(out / "two.txt") == "22");
    CHECK(entries(out) == 2);
}

TEST_CASE("a failed write leaves the old files whole and no new ones") {
    const Folder folder;
    const fs::path out = folder.path / "out";
    write_files(out, {{"one.txt", "old"}});
    fs::create_directory(out / "two.txt");  // a folder stands where the second file should go
    CHECK_THROWS_AS(write_files(out, {{"two.txt", "x"}}), Error);
    CHECK(read_file(out / "one.txt") == "old");
    CHECK(entries(out) == 2);
}

TEST_CASE("a folder that cannot be made is the machine's fault and leaves nothing") {
    const Folder folder;
    write_file(folder.path / "plain", "x");
    try {
        write_files(folder.path / "plain" / "below", {{"one.txt", "1"}});
        FAIL("expected an error");
    } catch (const Error& error) {
        CHECK(error.blame() == Blame::machine);
    }
    CHECK(read_file(folder.path / "plain") == "x");
}

TEST_CASE("reading a missing file blames the input") {
    try {
        [[maybe_unused]] const std::string content = read_file("/no/such/file");
        FAIL("expected an error");
    } catch (const Error& error) {
        CHECK(error.blame() == Blame::input);
        CHECK(std::string(error.what()) == "/no/such/file: no such file");
    }
}
