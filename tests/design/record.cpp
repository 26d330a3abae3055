// Records: reading with every problem named, writing back equal, setting by path.
#include <glint/core/error.h>
#include <glint/core/files.h>
#include <glint/core/samples.h>
#include <glint/design/design_record.h>
#include <glint/design/load.h>
#include <glint/design/reference.h>

#include <doctest/doctest.h>
#include <fmt/format.h>
#include <unistd.h>
#include <cmath>

using namespace glint;
namespace fs = std::filesystem;

namespace {

const char* const good = R"(<design name="t">
  <emitters wavelength="940 nm" aperture="10 um">
    <layout kind="grid" rows="8" columns="8" pitch="40 um"/>
    <addressing scheme="blocks" rows="2" columns="2"/>
    <lobe divergence="20 deg"/>
  </emitters>
  <drive peak_power="100 mW" pulse_width="3 ns"/>
  <firing shots="10" repetition="1 MHz"/>
  <optics><lens focal_length="3 mm" clear_aperture="4 mm"/></optics>
  <receiver>
    <lens focal_length="3 mm" f_number="1.2"/>
    <pixels columns="32" rows="24" pitch="20 um"/>
    <filter center="940 nm" width="20 nm"/>
    <photon_counting efficiency="20 %" bin="250 ps" gate="30 m"/>
  </receiver>
  <placement scene="s.xml"/>
</design>
)";

// The design text with one part replaced, as a file; loaded. Returns the error text, "" when there is none.
std::string problems_with(const std::string& from, const std::string& to,
                          std::vector<Setting> settings = {}) {
    std::string text = good;
    const auto at = text.find(from);
    REQUIRE(at != std::string::npos);
    text.replace(at, from.size(), to);
    const fs::path file = fs::temp_directory_path() / fmt::format("glint-record-{}.xml", ::getpid());
    write_file(file, text);
    std::string message;
    try {
        [[maybe_unused]] const LoadedDesign loaded = load_design(file, settings);
    } catch (const Error& error) {
        message = error.what();
    }
    fs::remove(file);
    return message;
}

bool holds(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

}  // namespace

TEST_CASE("a good design reads without a problem") { CHECK(problems_with("name=\"t\"", "name=\"u\"") == ""); }

TEST_CASE("a misspelt field names line, path and the nearest known name") {
    const std::string text = problems_with("pitch=\"40 um\"", "ptich=\"40 um\"");
    CHECK(holds(text, ".xml:3: emitters/layout/ptich: unknown field 'ptich'"));
    CHECK(holds(text, "nearest: pitch"));
    CHECK(holds(
        text,
        ".xml:3: emitters/layout/pitch: missing field 'pitch'; accepted: a length from 100 nm to 10 mm"));
}

TEST_CASE("a field in the wrong element is told where it belongs") {
    const std::string text = problems_with("<drive ", "<drive f_number=\"2\" ");
    CHECK(holds(text, "the field of that name is") ==
          false);  // not below <drive>: only its own fields are named
    CHECK(holds(text,
                "drive/f_number: unknown field 'f_number'; accepted: by, peak_power, current, pulse_width "
                "or shape"));
    CHECK(holds(problems_with("<receiver>", "<receiver f_number=\"2\">"),
                "the field of that name is lens/f_number"));
}

TEST_CASE("every problem of a file is reported in one go") {
    const std::string text = problems_with("wavelength=\"940 nm\" aperture=\"10 um\"",
                                           "wavelength=\"940\" aperture=\"10 ns\" extra=\"1\"");
    CHECK(holds(text, "'940' lacks a unit; accepted: a length from 400 nm to 1.8 um"));
    CHECK(holds(text, "'10 ns' is a time, not a length"));
    CHECK(holds(text, "unknown field 'extra'"));
}

TEST_CASE("bad values of every type are refused") {
    CHECK(holds(problems_with("rows=\"8\"", "rows=\"8.5\""), "'8.5' is not a whole number"));
    CHECK(holds(problems_with("rows=\"8\"", "rows=\"0\""),
                "'0' is out of range; accepted: a whole number from 1 to 4096"));
    CHECK(holds(problems_with("kind=\"grid\"", "kind=\"square\""),
                "unknown kind 'square'; accepted: grid, hexagonal, scattered or list"));
    CHECK(holds(problems_with("940 nm\" aperture", "nan nm\" aperture"),
                "'nan nm' is not a number with a unit"));
    CHECK(holds(problems_with("40 um", "40 m"), "'40 m' is out of range"));
    CHECK(holds(problems_with("scene=\"s.xml\"", "scene=\" \""), "an empty file name"));
}

TEST_CASE("broken XML and a wrong root say so with the line") {
    CHECK(holds(problems_with("</receiver>", "</reciever>"), "not well-formed XML: mismatched element"));
    CHECK(holds(problems_with("<design name=\"t\">", "<design name=\"t\""), "not well-formed XML"));
    const fs::path file = fs::temp_directory_path() / fmt::format("glint-root-{}.xml", ::getpid());
    write_file(file, "<plan/>");
    CHECK_THROWS_WITH_AS((void)load_design(file),
                         doctest::Contains(":1: the root element is <plan>; accepted: <design>"), Error);
    write_file(file, "");
    CHECK_THROWS_WITH_AS((void)load_design(file), doctest::Contains("not well-formed XML: empty document"),
                         Error);
    fs::remove(file);
}

TEST_CASE("stray text, unknown and doubled elements are refused") {
    CHECK(holds(problems_with("<drive ", "words <drive "), "stray text inside the element"));
    CHECK(holds(problems_with("<drive ", "<engine/><drive "), "unknown element <engine>"));
    CHECK(holds(problems_with("<firing ", "<drive peak_power=\"1 W\" pulse_width=\"1 ns\"/><firing "),
                "<drive> stands here twice"));
}

TEST_CASE("a missing element is one message, not one a field") {
    const std::string text =
        problems_with("<photon_counting efficiency=\"20 %\" bin=\"250 ps\" gate=\"30 m\"/>", "");
    CHECK(holds(text,
                "receiver/photon_counting: missing element <photon_counting>; accepted: <photon_counting> "
                "with at least efficiency, bin, gate"));
    CHECK(!holds(text, "missing field"));
}

TEST_CASE("fields that do not apply to the choice made are contradictions") {
    CHECK(holds(problems_with("pitch=\"40 um\"", "pitch=\"40 um\" spacing=\"50 um\""),
                "'spacing' contradicts kind=\"grid\"; accepted: spacing only with kind scattered"));
    CHECK(holds(problems_with("scheme=\"blocks\"", "scheme=\"rows\""),
                "'columns' contradicts scheme=\"rows\""));
}

TEST_CASE("fields that contradict each other are named") {
    CHECK(holds(problems_with("rows=\"2\" columns=\"2\"", "rows=\"3\" columns=\"2\""),
                ":4: emitters/addressing/rows: 3 rows of zones do not divide the 8 rows of emitters; "
                "accepted: a divisor of 8"));
    CHECK(holds(problems_with("gate=\"30 m\"", "gate=\"300 m\""), "the next shot leaves after 1 us"));
    CHECK(holds(problems_with("center=\"940 nm\"", "center=\"905 nm\""),
                "the filter passes 895 nm to 915 nm, the emitters send 940 nm"));
    CHECK(holds(problems_with("pulse_width=\"3 ns\"", "pulse_width=\"3 us\""),
                "longer than the 1 us from shot to shot"));
    CHECK(holds(problems_with("<optics>", "<optics><diffuser horizontal=\"10 deg\" vertical=\"10 deg\"/>"),
                "the lens stands too late"));
    CHECK(holds(problems_with("scheme=\"blocks\" rows=\"2\" columns=\"2\"", "scheme=\"list\""),
                "the layout is no list"));
}

TEST_CASE("settings change a field, and bad ones are problems of their own") {
    CHECK(problems_with("name=\"t\"", "name=\"u\"",
                        {{"drive/pulse_width", "4 ns"}, {"optics/lens/focal_length", "4 mm"}}) == "");
    CHECK(holds(problems_with("name=\"t\"", "name=\"u\"", {{"drive/pulse_with", "4 ns"}}),
                "--set drive/pulse_with=4 ns: drive/pulse_with: unknown field 'pulse_with'; accepted: "
                "by, peak_power, current, pulse_width or shape (nearest: pulse_width)"));
    CHECK(holds(problems_with("name=\"t\"", "name=\"u\"", {{"optics/lens[2]/focal_length", "4 mm"}}),
                "there is no 'lens[2]' to set"));
    CHECK(holds(problems_with("name=\"t\"", "name=\"u\"", {{"drive/pulse_width", "4 m"}}),
                "'4 m' is a length, not a time"));
    CHECK_THROWS_AS((void)parse_setting("nothing"), Error);
}

TEST_CASE("an empty setting takes a field back") {
    CHECK(holds(problems_with("<placement", "<environment source=\"sun\" illuminance=\"1 klx\"/><placement",
                              {{"environment/source", "none"}}),
                "'illuminance' contradicts source=\"none\""));
    CHECK(problems_with("<placement", "<environment source=\"sun\" illuminance=\"1 klx\"/><placement",
                        {{"environment/source", "none"}, {"environment/illuminance", ""}}) == "");
    CHECK(holds(problems_with("name=\"t\"", "name=\"u\"", {{"drive/pulse_width", " "}}),
                "missing field 'pulse_width'"));
    Design design;
    design.firing.frame_period = 1;
    Places places;
    CHECK(!set_field(design_record(), &design, places, "firing/frame_period", ""));
    CHECK(!design.firing.frame_period.has_value());
}

TEST_CASE("a setting reaches the field it names") {
    Design design;
    Places places;
    design.optics.elements = {Lens{}, Lens{}};
    CHECK(!set_field(design_record(), &design, places, "optics/lens[2]/focal_length", "7 mm"));
    CHECK(std::get<Lens>(design.optics.elements[1]).focal_length == 7e-3);
    CHECK(!set_field(design_record(), &design, places, "emitters/lobe/width", "fwhm"));
    CHECK(design.emitters.lobe.width == BeamWidth::fwhm);
}

// Fills every field that applies with a random accepted value; optional ones sometimes.
namespace {
void randomize(const Record& record, void* owner, RandomStream& random) {
    for (const Field& field : record.fields) {
        if (!applies(record, field, owner)) continue;
        if (field.type == FieldType::choice)
            field.set(owner, field.choices[random.below(field.choices.size())]);
    }
    for (const Field& field : record.fields) {
        if (!applies(record, field, owner) || field.type == FieldType::choice) continue;
        if (field.type == FieldType::text || field.type == FieldType::file) {
            field.set(owner,
                      std::string(field.type == FieldType::file ? "a b&<>\"'.xml" : "text <&> \"' \xC2\xB5"));
            continue;
        }
        const double low = std::isfinite(field.range.low) ? field.range.low : -1e3,
                     high = std::isfinite(field.range.high) ? field.range.high : 1e3;
        const double value = low + (high - low) * (1 - random.uniform());
        if (field.type == FieldType::integer)
            field.set(owner, static_cast<std::int64_t>(value));
        else
            field.set(owner, value);
    }
    for (const Part& part : record.parts) randomize(part.of(), part.inside(owner), random);
    for (const Sequence& sequence : record.sequence)
        for (std::size_t kind = 0; kind < sequence.kinds.size(); ++kind)
            randomize(sequence.kinds[kind], sequence.append(owner, kind), random);
}
}  // namespace

TEST_CASE("a random design written and read again is equal, 500 times") {
    RandomStream random(3);
    for (int i = 0; i < 500; ++i) {
        Design design;
        randomize(design_record(), &design, random);
        Design again;
        const ReadReport report = read_record(design_record(), &again, write_design(design), "again");
        REQUIRE_MESSAGE(report.problems.empty(), Error(report.problems).what());
        REQUIRE(again == design);
    }
}

TEST_CASE("the reference names every field once, and only known paths can be asked for") {
    const std::string text = reference_text(design_record());
    CHECK(holds(text, "emitters/layout/pitch\n"));
    CHECK(holds(
        text,
        "a length from 100 nm to 10 mm (nm, um, mm, cm, m, km); required; only with kind grid or hexagonal"));
    CHECK(holds(reference_text(design_record(), "drive"), "drive/pulse_width"));
    CHECK(!holds(reference_text(design_record(), "drive"), "emitters/"));
    CHECK_THROWS_WITH_AS((void)reference_text(design_record(), "drvie"), doctest::Contains("accepted: drive"),
                         Error);
    CHECK(reference_markdown(design_record()).size() > 5000);
}
