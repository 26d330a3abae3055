// Faults of the machine: exit 3, and the old results still whole.
#include "program/run.h"

#include <doctest/doctest.h>
#include <csignal>
#include <filesystem>
#include <fstream>
#include <sstream>

using namespace glint::test;
namespace fs = std::filesystem;

namespace {

std::string listing(const std::string& folder) {
    return run("cd '" + folder + "' && find . -type f -exec md5sum {} + | sort").out;
}

struct Assessed {
    Folder folder;
    std::string design, out;
    Assessed() {
        folder.write("scene.xml", small_scene);
        design = folder.write("d.xml", small_design);
        out = folder.path("out");
        REQUIRE(run("glintplan assess " + design + " --quiet --out " + out).status == 0);
    }
};

}  // namespace

TEST_CASE("a disk that fills up: exit 3, old results whole, no temporaries") {
    const Assessed done;
    const std::string before = listing(done.out);
    // A limit on file size makes write() fail in the middle of a file, as a full disk does.
    const Run full = run("trap '' XFSZ; ulimit -f 8; glintplan assess " + done.design +
                         " --set 'drive/peak_power=9 mW' --quiet --out " + done.out);
    CHECK(full.status == 3);
    CHECK(holds(full.err, "cannot write the file"));
    CHECK(listing(done.out) == before);
    CHECK(!before.empty());
}

TEST_CASE("a full disk and no old results: exit 3 and no folder") {
    const Assessed done;
    const Run full = run("trap '' XFSZ; ulimit -f 8; glintplan assess " + done.design + " --quiet --out " +
                         done.folder.path("new/deep"));
    CHECK(full.status == 3);
    CHECK(!fs::exists(done.folder.path("new")));
}

TEST_CASE("a folder that cannot be made: exit 3") {
    const Assessed done;
    const std::string file = done.folder.write("plain", "text");
    const Run refused = run("glintplan assess " + done.design + " --quiet --out " + file + "/below");
    CHECK(refused.status == 3);
    CHECK(holds(refused.err, "cannot make the output folder"));
    CHECK(run("glintplan assess " + done.design + " --quiet --out /proc/nothing").status == 3);
}

TEST_CASE("standard output that is full: exit 3") { CHECK(run("glintplan fields > /dev/full").status == 3); }

TEST_CASE("Ctrl-C stops soon, says so, and leaves what was there") {
    const Assessed done;
    const std::string before = listing(done.out);
    const Run stopped = run("'" GLINTPLAN_PATH "' assess " + done.design +
                            " --set sampling/rays_per_pixel=1024 --set receiver/pixels/columns=4000 --set "
                            "'receiver/pixels/pitch=0.2 um' " +
                            "--quiet --out " + done.out +
                            " & pid=$!; sleep 1; start=$(date +%s%N); kill -INT $pid; wait $pid; status=$?; "
                            "end=$(date +%s%N); echo $(( (end - start) / 1000000 )); exit $status");
    CHECK(stopped.status == 130);
    CHECK(holds(stopped.err, "stopped; nothing was written"));
    CHECK(std::stoi(stopped.out) < 500);
    CHECK(listing(done.out) == before);
}
