// XML text into a record, all problems named, and single fields by path.
#include <glint/core/text.h>
#include <glint/design/record_file.h>

#include <fmt/format.h>
#include <fmt/ranges.h>
#include <tinyxml2.h>
#include <algorithm>
#include <charconv>

namespace glint {
namespace {

std::string joined(const std::string& path, std::string_view name) {
    return path.empty() ? std::string(name) : path + "/" + std::string(name);
}

std::vector<std::string> field_names(const Record& record) {
    std::vector<std::string> names;
    for (const Field& field : record.fields) names.push_back(field.name);
    return names;
}

std::vector<std::string> element_names(const Record& record) {
    std::vector<std::string> names;
    for (const Part& part : record.parts) names.push_back(part.of().name);
    for (const Sequence& sequence : record.sequence)
        for (const Record& kind : sequence.kinds) names.push_back(kind.name);
    return names;
}

// Path, below this record, of a field that has exactly this name; "" when there is none.
std::string find_below(const Record& record, std::string_view name, const std::string& path) {
    if (record.field(name) != nullptr) return joined(path, name);
    const auto look = [&](const Record& inner) { return find_below(inner, name, joined(path, inner.name)); };
    for (const Part& part : record.parts)
        if (std::string found = look(part.of()); !found.empty()) return found;
    for (const Sequence& sequence : record.sequence)
        for (const Record& kind : sequence.kinds)
            if (std::string found = look(kind); !found.empty()) return found;
    return {};
}

std::string suggest(const Record& record, std::string_view name, const std::vector<std::string>& known) {
    const std::string near = nearest_name(name, known);
    if (!near.empty()) return fmt::format("{} (nearest: {})", join_or(known), near);
    const std::string below = find_below(record, name, "");
    if (!below.empty()) return fmt::format("{} (the field of that name is {})", join_or(known), below);
    return known.empty() ? "nothing here" : join_or(known);
}

class Reader {
public:
    ReadReport report;

    void read(const Record& record, void* owner, const tinyxml2::XMLElement& element,
              const std::string& path) {
        report.places.lines[path] = element.GetLineNum();
        for (const auto* a = element.FirstAttribute(); a != nullptr; a = a->Next())
            read_field(record, owner, *a, path);
        std::map<std::string, int> seen;
        for (const auto* node = element.FirstChild(); node != nullptr; node = node->NextSibling()) {
            if (node->ToComment() != nullptr) continue;
            if (const auto* child = node->ToElement()) {
                read_element(record, owner, *child, path, ++seen[child->Name()]);
            } else {
                complain(path, node->GetLineNum(), "stray text inside the element",
                         "values as attributes, e.g. pitch=\"24 um\"");
            }
        }
    }

    void complain(const std::string& path, int line, std::string what, std::string accepted) {
        report.problems.push_back({std::move(what), std::move(accepted), path, report.places.file, line});
    }

private:
    void read_field(const Record& record, void* owner, const tinyxml2::XMLAttribute& attribute,
                    const std::string& path) {
        const std::string name = attribute.Name();
        const int line = attribute.GetLineNum();
        const Field* field = record.field(name);
        if (field == nullptr) {
            complain(joined(path, name), line, fmt::format("unknown field '{}'", name),
                     suggest(record, name, field_names(record)));
            return;
        }
        const std::string field_path = joined(path, name);
        report.places.lines[field_path] = line;
        const ParsedValue parsed = parse_value(*field, attribute.Value());
        if (parsed.problem.empty())
            field->set(owner, parsed.value);
        else
            complain(field_path, line, parsed.problem, accepted_by(*field));
    }

    void read_element(const Record& record, void* owner, const tinyxml2::XMLElement& child,
                      const std::string& path, int occurrence) {
        const std::string name = child.Name();
        const std::string child_path =
            joined(path, occurrence > 1 ? fmt::format("{}[{}]", name, occurrence) : name);
        for (const Part& part : record.parts) {
            if (part.of().name != name) continue;
            if (occurrence > 1)
                complain(child_path, child.GetLineNum(), fmt::format("<{}> stands here twice", name), "one");
            else
                read(part.of(), part.inside(owner), child, child_path);
            return;
        }
        for (const Sequence& sequence : record.sequence) {
            for (std::size_t kind = 0; kind < sequence.kinds.size(); ++kind) {
                if (sequence.kinds[kind].name != name) continue;
                read(sequence.kinds[kind], sequence.append(owner, kind), child, child_path);
                return;
            }
        }
        complain(child_path, child.GetLineNum(), fmt::format("unknown element <{}>", name),
                 suggest(record, name, element_names(record)));
    }
};

// "lens[2]" -> {"lens", 2}; occurrence 0 when the index is broken.
struct Step {
    std::string name;
    int occurrence = 1;
};

Step parse_step(std::string_view text) {
    const auto bracket = text.find('[');
    if (bracket == std::string_view::npos) return {std::string(text), 1};
    Step step{std::string(text.substr(0, bracket)), 0};
    if (!text.ends_with(']')) return step;
    const std::string_view digits = text.substr(bracket + 1, text.size() - bracket - 2);
    const auto [end, error] = std::from_chars(digits.data(), digits.data() + digits.size(), step.occurrence);
    if (error != std::errc{} || end != digits.data() + digits.size() || step.occurrence < 1)
        step.occurrence = 0;
    return step;
}

struct Owner {
    const Record* record = nullptr;
    void* object = nullptr;
};

// The element one step below; an empty Owner when there is none.
Owner step_into(const Owner& owner, const Step& step) {
    for (const Part& part : owner.record->parts)
        if (part.of().name == step.name && step.occurrence == 1)
            return {&part.of(), part.inside(owner.object)};
    for (const Sequence& sequence : owner.record->sequence) {
        int seen = 0;
        for (std::size_t i = 0; i < sequence.size(owner.object); ++i) {
            const Record& kind = sequence.kinds[sequence.kind_of(owner.object, i)];
            if (kind.name == step.name && ++seen == step.occurrence)
                return {&kind, sequence.item(owner.object, i)};
        }
    }
    return {};
}

void check_given(const Record& record, const void* owner, const Places& places, const std::string& path,
                 std::vector<Problem>& problems) {
    for (const Field& field : record.fields) {
        const std::string field_path = joined(path, field.name);
        const bool given = places.given(field_path), fits = applies(record, field, owner);
        if (field.required && fits && !given)
            problems.push_back(places.at(
                {fmt::format("missing field '{}'", field.name), accepted_by(field), field_path, {}, 0}));
        if (given && !fits) {
            const std::string chosen = std::get<std::string>(*record.field(field.when.field)->get(owner));
            problems.push_back(places.at(
                {fmt::format("'{}' contradicts {}=\"{}\"", field.name, field.when.field, chosen),
                 fmt::format("{} only with {} {}", field.name, field.when.field, join_or(field.when.values)),
                 field_path,
                 {},
                 0}));
        }
    }
    // Reading never changes the object; the walkers share one untyped access.
    void* object = const_cast<void*>(owner);
    for (const Part& part : record.parts) {
        const std::string part_path = joined(path, part.of().name);
        std::vector<Problem> inner;
        check_given(part.of(), part.inside(object), places, part_path, inner);
        if (!inner.empty() && !places.given(part_path)) {  // one message for the element, not one a field
            std::vector<std::string> missing;
            for (const Problem& problem : inner) missing.push_back(problem.path.substr(part_path.size() + 1));
            inner = {
                places.at({fmt::format("missing element <{}>", part.of().name),
                           fmt::format("<{}> with at least {}", part.of().name, fmt::join(missing, ", ")),
                           part_path,
                           {},
                           0})};
        }
        problems.insert(problems.end(), inner.begin(), inner.end());
    }
    for (const Sequence& sequence : record.sequence) {
        std::map<std::string, int> seen;
        for (std::size_t i = 0; i < sequence.size(object); ++i) {
            const Record& kind = sequence.kinds[sequence.kind_of(object, i)];
            const int occurrence = ++seen[kind.name];
            check_given(
                kind, sequence.item(object, i), places,
                joined(path, occurrence > 1 ? fmt::format("{}[{}]", kind.name, occurrence) : kind.name),
                problems);
        }
    }
}

}  // namespace

Problem Places::at(Problem problem) const {
    problem.file = file;
    std::string path = problem.path;
    for (;;) {
        if (const auto found = lines.find(path); found != lines.end()) {
            problem.line = found->second;
            return problem;
        }
        if (path.empty()) return problem;
        const auto slash = path.rfind('/');
        path = slash == std::string::npos ? "" : path.substr(0, slash);
    }
}

ReadReport read_record(const Record& record, void* target, const std::string& xml, const std::string& file) {
    Reader reader;
    reader.report.places.file = file;
    tinyxml2::XMLDocument document;
    if (document.Parse(xml.data(), xml.size()) != tinyxml2::XML_SUCCESS) {
        std::string what = tinyxml2::XMLDocument::ErrorIDToName(document.ErrorID());
        if (what.starts_with("XML_ERROR_")) what = what.substr(10);
        std::ranges::transform(what, what.begin(),
                               [](char c) { return c == '_' ? ' ' : static_cast<char>(std::tolower(c)); });
        reader.complain("", document.ErrorLineNum(), "not well-formed XML: " + what,
                        "an XML file with root <" + record.name + ">");
        return std::move(reader.report);
    }
    const tinyxml2::XMLElement* root = document.RootElement();
    if (root == nullptr || root->Name() != record.name) {
        reader.complain(
            "", root == nullptr ? 1 : root->GetLineNum(),
            root == nullptr ? "no root element" : fmt::format("the root element is <{}>", root->Name()),
            "<" + record.name + ">");
        return std::move(reader.report);
    }
    reader.read(record, target, *root, "");
    return std::move(reader.report);
}

std::optional<Problem> set_field(const Record& record, void* target, Places& places, std::string_view path,
                                 std::string_view text) {
    const std::string whole(path);
    const auto fail = [&](std::string what, std::string accepted) {
        return Problem{std::move(what), std::move(accepted), whole, {}, 0};
    };
    Owner owner{&record, target};
    std::string_view rest = path;
    for (auto slash = rest.find('/'); slash != std::string_view::npos; slash = rest.find('/')) {
        const Step step = parse_step(rest.substr(0, slash));
        const Owner next = step_into(owner, step);
        if (next.record == nullptr)
            return fail(fmt::format("there is no '{}' to set", rest.substr(0, slash)),
                        suggest(*owner.record, step.name, element_names(*owner.record)));
        owner = next;
        rest.remove_prefix(slash + 1);
    }
    const Field* field = owner.record->field(rest);
    if (field == nullptr)
        return fail(fmt::format("unknown field '{}'", rest),
                    suggest(*owner.record, rest, field_names(*owner.record)));
    if (trim(text).empty()) {
        field->clear(owner.object);
        places.lines.erase(whole);
        return std::nullopt;
    }
    const ParsedValue parsed = parse_value(*field, text);
    if (!parsed.problem.empty()) return fail(parsed.problem, accepted_by(*field));
    field->set(owner.object, parsed.value);
    places.lines.try_emplace(whole, 0);
    return std::nullopt;
}

std::vector<Problem> check_given(const Record& record, const void* target, const Places& places) {
    std::vector<Problem> problems;
    check_given(record, target, places, "", problems);
    return problems;
}

}  // namespace glint
