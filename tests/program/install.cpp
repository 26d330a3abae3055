// The installed library, used from another project with find_package(glint).
#include "program/run.h"

#include <doctest/doctest.h>

using namespace glint::test;

TEST_CASE("a project builds against the installed library and evaluates a design") {
    const Folder folder;
    folder.write("scene.xml", small_scene);
    const std::string design = folder.write("d.xml", small_design), prefix = folder.path("prefix");
    const Run installed = run("cmake --install '" GLINT_BUILD_DIR "' --prefix " + prefix);
    REQUIRE_MESSAGE(installed.status == 0, installed.err);
    const Run built = run("cmake -S tests/consumer -B " + folder.path("b") +
                          " -DCMAKE_PREFIX_PATH=" + prefix + " && cmake --build " + folder.path("b"));
    REQUIRE_MESSAGE(built.status == 0, built.err);
    const Run used = run(folder.path("b/consumer") + " " + design);
    CHECK_MESSAGE(used.status == 0, used.err);
    CHECK(holds(used.out, "no laser classification"));
    CHECK(holds(used.out, " points, AE/AEL "));
    CHECK(run(prefix + "/bin/glintplan --version").status == 0);
}
