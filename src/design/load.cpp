// A design file into a Design, or every reason why not.
#include <glint/core/files.h>
#include <glint/design/design_record.h>
#include <glint/design/load.h>

#include <iterator>

namespace glint {

Setting parse_setting(const std::string& text) {
    const auto equals = text.find('=');
    if (equals == std::string::npos || equals == 0)
        throw Error(Problem{.what = "'" + text + "' sets nothing",
                            .accepted = "PATH=VALUE, e.g. drive/pulse_width=\"3 ns\""});
    return {text.substr(0, equals), text.substr(equals + 1)};
}

LoadedDesign load_design(const std::filesystem::path& file, std::span<const Setting> settings) {
    LoadedDesign loaded;
    constexpr std::size_t limit = 16u << 20;  // a design is a page or two
    const std::string xml = read_file(file, limit);
    ReadReport report = read_record(design_record(), &loaded.design, xml, file.string());
    loaded.places = std::move(report.places);
    std::vector<Problem> problems = std::move(report.problems);
    for (const Setting& setting : settings) {
        std::optional<Problem> problem =
            set_field(design_record(), &loaded.design, loaded.places, setting.path, setting.value);
        if (!problem) continue;
        problem->file = "--set " + setting.path + "=" + setting.value;
        problems.push_back(std::move(*problem));
    }
    // A file that could not be read as XML has no fields; naming each as missing would only hide the reason.
    if (loaded.places.given("")) {
        for (Problem& problem : check_given(design_record(), &loaded.design, loaded.places)) {
            // A field whose value was refused is there; it is not also missing.
            bool named = false;
            for (const Problem& known : problems) named = named || known.path == problem.path;
            if (!named) problems.push_back(std::move(problem));
        }
    }
    if (problems.empty())
        for (Problem& problem : contradictions(loaded.design))
            problems.push_back(loaded.places.at(std::move(problem)));
    if (!problems.empty()) throw Error(std::move(problems));
    loaded.folder = file.parent_path();
    return loaded;
}

std::string write_design(const Design& design) { return write_record(design_record(), &design); }

}  // namespace glint
