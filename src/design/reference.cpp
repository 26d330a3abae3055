// What can be set, printed from the records, for the terminal and for docs/.
#include <glint/core/error.h>
#include <glint/core/text.h>
#include <glint/design/reference.h>

#include <fmt/format.h>

namespace glint {
namespace {

std::string joined(const std::string& path, const std::string& name) {
    return path.empty() ? name : path + "/" + name;
}

std::string initial_text(const Record& record, const Field& field) {
    if (field.required) return "required";
    const std::optional<Value> value = record.initial(field.name);
    const std::string text = value ? format_value(field, *value) : "";
    return text.empty() ? "not set" : text;
}

std::string condition(const Field& field) {
    return field.when.field.empty()
               ? ""
               : fmt::format("only with {} {}", field.when.field, join_or(field.when.values));
}

// Visits every record with its path, depth first, in file order.
template <class Visit>
void walk(const Record& record, const std::string& path, const Visit& visit) {
    visit(record, path);
    for (const Part& part : record.parts) walk(part.of(), joined(path, part.of().name), visit);
    for (const Sequence& sequence : record.sequence)
        for (const Record& kind : sequence.kinds) walk(kind, joined(path, kind.name), visit);
}

std::string field_lines(const Record& record, const Field& field, const std::string& path) {
    std::string text = fmt::format("{}\n    {}\n    {}; {}", joined(path, field.name), field.help,
                                   accepted_by(field), initial_text(record, field));
    if (const std::string only = condition(field); !only.empty()) text += "; " + only;
    return text + "\n";
}

}  // namespace

std::string reference_text(const Record& record, std::string_view path) {
    std::string text;
    std::vector<std::string> known;
    walk(record, "", [&](const Record& at, const std::string& element) {
        if (!element.empty()) known.push_back(element);
        const bool wanted = path.empty() || element == path || element.starts_with(std::string(path) + "/");
        if (wanted && !at.help.empty()) text += fmt::format("<{}>  {}\n", at.name, at.help);
        for (const Field& field : at.fields) {
            known.push_back(joined(element, field.name));
            if (wanted || known.back() == path) text += field_lines(at, field, element);
        }
    });
    if (text.empty()) {
        const std::string near = nearest_name(path, known);
        throw Error(Problem{.what = fmt::format("there is no field or element '{}'", path),
                            .accepted = near.empty() ? "a path that 'glintplan fields' lists" : near});
    }
    return text;
}

std::string reference_markdown(const Record& record) {
    std::string text;
    walk(record, "", [&](const Record& at, const std::string& element) {
        text += fmt::format("\n## `{}`\n\n{}.\n", element.empty() ? at.name : element, at.help);
        if (at.fields.empty()) return;
        text += "\n| field | accepts | default | meaning |\n|---|---|---|---|\n";
        for (const Field& field : at.fields) {
            const std::string only = condition(field);
            text += fmt::format("| `{}` | {} | {} | {}{} |\n", field.name, accepted_by(field),
                                initial_text(at, field), field.help, only.empty() ? "" : " (" + only + ")");
        }
    });
    return text;
}

}  // namespace glint
