// What the walkers of a record share: accepted texts, parsing and printing of one field.
#include <glint/core/text.h>
#include <glint/design/record.h>

#include <fmt/format.h>
#include <charconv>
#include <cmath>

namespace glint {
namespace {

std::string show_bound(const Field& field, double bound) {
    if (field.type == FieldType::integer) return fmt::format("{:.0f}", bound);
    return format_quantity(bound, field.kind);
}

std::string show_range(const Field& field) {
    const Range& range = field.range;
    const bool low = std::isfinite(range.low), high = std::isfinite(range.high);
    const std::string from = low ? show_bound(field, range.low) : "";
    const std::string to = high ? show_bound(field, range.high) : "";
    if (low && high && range.above_low) return " above " + from + ", up to " + to;
    if (low && high) return " from " + from + " to " + to;
    if (low) return (range.above_low ? " above " : " of at least ") + from;
    if (high) return " up to " + to;
    return "";
}

std::string article(std::string_view noun) {
    const bool vowel = std::string_view("aeiou").find(noun.front()) != std::string_view::npos;
    return (vowel ? "an " : "a ") + std::string(noun);
}

}  // namespace

const Field* Record::field(std::string_view field_name) const {
    for (const Field& candidate : fields)
        if (candidate.name == field_name) return &candidate;
    return nullptr;
}

std::string accepted_by(const Field& field) {
    switch (field.type) {
        case FieldType::quantity: {
            const std::string units = field.kind == Kind::number ? "" : " (" + unit_list(field.kind) + ")";
            return article(name_of(field.kind)) + show_range(field) + units;
        }
        case FieldType::integer:
            return "a whole number" + show_range(field);
        case FieldType::choice:
            return join_or(field.choices);
        case FieldType::text:
            return "text";
        case FieldType::file:
            return "the name of a file";
    }
    return {};
}

ParsedValue parse_value(const Field& field, std::string_view text) {
    const auto fail = [](std::string why) { return ParsedValue{{}, std::move(why)}; };
    switch (field.type) {
        case FieldType::quantity: {
            const ParsedQuantity parsed = parse_quantity(text, field.kind);
            if (!parsed.problem.empty()) return fail(parsed.problem);
            if (!field.range.holds(parsed.value))
                return fail(fmt::format("'{}' is out of range", trim(text)));
            return {parsed.value, {}};
        }
        case FieldType::integer: {
            const std::string_view digits = trim(text);
            std::int64_t value = 0;
            const auto [end, error] = std::from_chars(digits.data(), digits.data() + digits.size(), value);
            if (error != std::errc{} || end != digits.data() + digits.size())
                return fail(fmt::format("'{}' is not a whole number", digits));
            if (!field.range.holds(static_cast<double>(value)))
                return fail(fmt::format("'{}' is out of range", digits));
            return {value, {}};
        }
        case FieldType::choice: {
            const std::string name(trim(text));
            for (const std::string& choice : field.choices)
                if (choice == name) return {name, {}};
            return fail(fmt::format("unknown {} '{}'", field.name, name));
        }
        case FieldType::text:
            return {std::string(text), {}};
        case FieldType::file: {
            const std::string name(trim(text));
            if (name.empty()) return fail("an empty file name");
            return {name, {}};
        }
    }
    return fail("unknown type of field");
}

std::string format_value(const Field& field, const Value& value) {
    if (const double* number = std::get_if<double>(&value)) return format_quantity(*number, field.kind);
    if (const std::int64_t* whole = std::get_if<std::int64_t>(&value)) return std::to_string(*whole);
    return std::get<std::string>(value);
}

bool applies(const Record& record, const Field& field, const void* owner) {
    if (field.when.field.empty()) return true;
    const Field* decider = record.field(field.when.field);
    const std::string value = std::get<std::string>(*decider->get(owner));
    for (const std::string& wanted : field.when.values)
        if (wanted == value) return true;
    return false;
}

}  // namespace glint
