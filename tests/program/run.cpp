// Running the program as a user does, and small designs to run it on.
#include "program/run.h"

#include <doctest/doctest.h>
#include <sys/wait.h>
#include <unistd.h>
#include <atomic>
#include <cstdlib>
#include <fstream>
#include <sstream>

namespace glint::test {
namespace {

std::string slurp(const std::filesystem::path& path) {
    std::ifstream stream(path, std::ios::binary);
    std::ostringstream text;
    text << stream.rdbuf();
    return text.str();
}

}  // namespace

Run run(const std::string& command) {
    const Folder folder;
    const std::string whole =
        "cd '" GLINT_SOURCE_DIR "' && glintplan() { '" GLINTPLAN_PATH "' \"$@\"; } && { " + command +
        "\n} >'" + folder.path("out") + "' 2>'" + folder.path("err") + "' </dev/null";
    std::ofstream(folder.path("script")) << whole << "\n";
    const int status = std::system(("bash '" + folder.path("script") + "'").c_str());
    return {WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status), slurp(folder.path("out")),
            slurp(folder.path("err"))};
}

Folder::Folder() {
    static std::atomic<int> count = 0;
    path_ = std::filesystem::temp_directory_path() /
            ("glint-program-" + std::to_string(::getpid()) + "-" + std::to_string(count++));
    std::filesystem::create_directories(path_);
}

Folder::~Folder() {
    std::error_code ignored;
    std::filesystem::remove_all(path_, ignored);
}

std::string Folder::write(const std::string& name, const std::string& content) const {
    std::ofstream(path_ / name, std::ios::binary) << content;
    return path(name);
}

std::string Folder::path(const std::string& name) const { return (path_ / name).string(); }

std::string replaced(std::string text, const std::string& from, const std::string& to) {
    const auto at = text.find(from);
    REQUIRE_MESSAGE(at != std::string::npos, from);
    return text.replace(at, from.size(), to);
}

bool holds(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

const char* const small_design = R"(<design name="Small">
  <emitters wavelength="940 nm" aperture="10 um">
    <layout kind="grid" rows="8" columns="8" pitch="40 um"/>
    <addressing scheme="blocks" rows="2" columns="2"/>
    <lobe divergence="20 deg"/>
  </emitters>
  <drive peak_power="10 mW" pulse_width="3 ns"/>
  <firing shots="50" repetition="1 MHz"/>
  <optics><lens focal_length="1 mm" clear_aperture="2 mm" defocus="100 um"/></optics>
  <receiver right="10 mm">
    <lens focal_length="2 mm" f_number="1.2"/>
    <pixels columns="24" rows="24" pitch="25 um"/>
    <filter center="940 nm" width="20 nm"/>
    <photon_counting efficiency="20 %" bin="250 ps" gate="30 m"/>
  </receiver>
  <placement scene="scene.xml" z="1 m"/>
  <environment source="sun" illuminance="10 klx"/>
  <requirements>
    <range distance="1 m" reflectance="50 %"/>
    <frame_rate minimum="1 Hz"/>
    <points object="wall" minimum="10"/>
  </requirements>
</design>
)";

const char* const small_scene = R"(<scene name="Small">
  <material name="paint" reflectance="60 %"/>
  <object name="floor" material="paint"><plane/></object>
  <object name="wall" material="paint"><box x="2 m" z="1 m" size_x="0.1 m" size_y="4 m" size_z="2 m"/></object>
</scene>
)";

}  // namespace glint::test
