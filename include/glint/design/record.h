// The one description of a struct's fields, from which reader, writer, settings, schema and reference all
// come.
//
// A Record lists the fields of one struct once, in a few words each. Everything else walks that list; adding
// a field is adding the member and one line. Owners are passed as untyped pointers because the walkers know
// no structs; the typed members are captured where the record is described.
#pragma once

#include <glint/core/quantity.h>
#include <cstdint>
#include <functional>
#include <limits>
#include <optional>
#include <string>
#include <type_traits>
#include <utility>
#include <variant>
#include <vector>

namespace glint {

/// What a field holds: SI number, whole number, or text (also the name of a choice).
using Value = std::variant<double, std::int64_t, std::string>;

enum class FieldType {
    quantity,  ///< a number with a unit
    integer,   ///< a whole number
    choice,    ///< one of a few names
    text,      ///< free text
    file,      ///< a path, relative to the file that names it
};

/// Accepted values of a quantity (SI) or an integer.
struct Range {
    double low = -std::numeric_limits<double>::infinity();
    double high = std::numeric_limits<double>::infinity();
    bool above_low = false;  ///< `low` itself is not accepted

    [[nodiscard]] bool holds(double value) const {
        return (above_low ? value > low : value >= low) && value <= high;
    }
};

[[nodiscard]] constexpr Range from_to(double low, double high) { return {low, high, false}; }
[[nodiscard]] constexpr Range above_to(double low, double high) { return {low, high, true}; }

/// The field applies only when the choice field `field` beside it has one of these values. Empty: always.
struct When {
    std::string field;
    std::vector<std::string> values;
};

struct Field {
    std::string name;
    FieldType type = FieldType::text;
    Kind kind = Kind::number;          ///< of a quantity
    Range range;                       ///< of a quantity or an integer
    std::vector<std::string> choices;  ///< of a choice
    bool required = false;             ///< must be given (when it applies)
    When when;
    std::string help;  ///< one line

    std::function<std::optional<Value>(const void* owner)>
        get;                                             ///< nothing when an optional field is not set
    std::function<void(void* owner, const Value&)> set;  ///< the value has been checked before
    std::function<void(void* owner)> clear;              ///< back to what a fresh struct holds
};

struct Record;

/// A struct held once inside another.
struct Part {
    std::vector<Record> record;  ///< exactly one; a vector because Record is not complete here
    std::function<void*(void* owner)> inside;

    [[nodiscard]] const Record& of() const { return record.front(); }
};

/// An ordered list of structs of one or several kinds, e.g. the elements of the optics.
struct Sequence {
    std::vector<Record> kinds;
    std::function<std::size_t(const void* owner)> size;
    std::function<std::size_t(const void* owner, std::size_t index)> kind_of;
    std::function<void*(void* owner, std::size_t index)> item;
    std::function<void*(void* owner, std::size_t kind)> append;
};

/// The description of one struct: its element name, its fields, and the structs inside it.
struct Record {
    std::string name;
    std::string help;
    std::vector<Field> fields;
    std::vector<Part> parts;
    std::vector<Sequence> sequence;                                         ///< none or one
    std::function<std::optional<Value>(const std::string& field)> initial;  ///< value in a fresh struct

    [[nodiscard]] const Field* field(std::string_view field_name) const;
};

/// Text a field accepts, for messages and the reference: "a length from 100 nm to 10 mm".
[[nodiscard]] std::string accepted_by(const Field&);

/// Reads and checks the text of one field. Either the value or what is wrong.
struct ParsedValue {
    Value value;
    std::string problem;
};
[[nodiscard]] ParsedValue parse_value(const Field&, std::string_view text);

/// The text that parse_value reads back to the same value.
[[nodiscard]] std::string format_value(const Field&, const Value&);

/// True when the field applies in this owner (see When).
[[nodiscard]] bool applies(const Record&, const Field&, const void* owner);

/// Builds the Record of struct Owner, one line a field.
template <class Owner>
class Describe {
public:
    Describe(std::string name, std::string help) {
        record_.name = std::move(name);
        record_.help = std::move(help);
    }

    /// A quantity held in a double or std::optional<double>.
    template <class Member>
    Describe& quantity(std::string name, Member Owner::*member, Kind kind, Range range, std::string help) {
        Field& field = add<double>(std::move(name), FieldType::quantity, member, std::move(help));
        field.kind = kind;
        field.range = range;
        return *this;
    }

    /// A whole number held in an int or std::optional<int>.
    template <class Member>
    Describe& integer(std::string name, Member Owner::*member, Range range, std::string help) {
        add<std::int64_t>(std::move(name), FieldType::integer, member, std::move(help)).range = range;
        return *this;
    }

    /// An enum whose values 0, 1, ... have these names.
    template <class Enum>
    Describe& choice(std::string name, Enum Owner::*member, std::vector<std::string> choices,
                     std::string help) {
        Field field{.name = std::move(name),
                    .type = FieldType::choice,
                    .choices = std::move(choices),
                    .when = {},
                    .help = std::move(help),
                    .get = {},
                    .set = {}};
        field.get = [member, names = field.choices](const void* owner) -> std::optional<Value> {
            return names.at(static_cast<std::size_t>(static_cast<const Owner*>(owner)->*member));
        };
        field.set = [member, names = field.choices](void* owner, const Value& value) {
            for (std::size_t i = 0; i < names.size(); ++i)
                if (names[i] == std::get<std::string>(value))
                    static_cast<Owner*>(owner)->*member = static_cast<Enum>(i);
        };
        field.clear = [member](void* owner) { static_cast<Owner*>(owner)->*member = Owner{}.*member; };
        record_.fields.push_back(std::move(field));
        return *this;
    }

    Describe& text(std::string name, std::string Owner::*member, std::string help) {
        add<std::string>(std::move(name), FieldType::text, member, std::move(help));
        return *this;
    }

    Describe& file(std::string name, std::string Owner::*member, std::string help) {
        add<std::string>(std::move(name), FieldType::file, member, std::move(help));
        return *this;
    }

    /// The field described last must be given.
    Describe& required() {
        record_.fields.back().required = true;
        return *this;
    }

    /// The field described last applies only when choice `field` has one of these values.
    Describe& when(std::string field, std::vector<std::string> values) {
        record_.fields.back().when = {std::move(field), std::move(values)};
        return *this;
    }

    /// A struct held once.
    template <class Inner>
    Describe& part(Inner Owner::*member, Record record) {
        record_.parts.push_back(
            {{std::move(record)}, [member](void* owner) { return &(static_cast<Owner*>(owner)->*member); }});
        return *this;
    }

    /// A list of structs of one kind, in file order.
    template <class Item>
    Describe& sequence(std::vector<Item> Owner::*member, Record kind) {
        Sequence s;
        s.kinds.push_back(std::move(kind));
        s.size = [member](const void* owner) { return (static_cast<const Owner*>(owner)->*member).size(); };
        s.kind_of = [](const void*, std::size_t) { return std::size_t{0}; };
        s.item = [member](void* owner, std::size_t i) -> void* {
            return &(static_cast<Owner*>(owner)->*member)[i];
        };
        s.append = [member](void* owner, std::size_t) -> void* {
            return &(static_cast<Owner*>(owner)->*member).emplace_back();
        };
        record_.sequence.push_back(std::move(s));
        return *this;
    }

    /// A list of structs of several kinds, in file order; kinds in the order of the variant.
    template <class... Items>
    Describe& sequence(std::vector<std::variant<Items...>> Owner::*member, std::vector<Record> kinds) {
        Sequence s;
        s.kinds = std::move(kinds);
        s.size = [member](const void* owner) { return (static_cast<const Owner*>(owner)->*member).size(); };
        s.kind_of = [member](const void* owner, std::size_t i) {
            return (static_cast<const Owner*>(owner)->*member)[i].index();
        };
        s.item = [member](void* owner, std::size_t i) -> void* {
            return std::visit([](auto& item) -> void* { return &item; },
                              (static_cast<Owner*>(owner)->*member)[i]);
        };
        s.append = [member](void* owner, std::size_t kind) -> void* {
            auto& list = static_cast<Owner*>(owner)->*member;
            list.push_back(fresh<Items...>(kind));
            return std::visit([](auto& item) -> void* { return &item; }, list.back());
        };
        record_.sequence.push_back(std::move(s));
        return *this;
    }

    [[nodiscard]] Record done() {
        record_.initial = [fields = record_.fields](const std::string& name) -> std::optional<Value> {
            const Owner fresh_owner{};
            for (const Field& field : fields)
                if (field.name == name) return field.get(&fresh_owner);
            return std::nullopt;
        };
        return std::move(record_);
    }

private:
    template <class... Items>
    static std::variant<Items...> fresh(std::size_t kind) {
        std::variant<Items...> item;
        std::size_t index = 0;
        ((index++ == kind ? static_cast<void>(item = Items{}) : void()), ...);
        return item;
    }

    template <class Stored, class Member>
    Field& add(std::string name, FieldType type, Member Owner::*member, std::string help) {
        Field field{.name = std::move(name),
                    .type = type,
                    .choices = {},
                    .when = {},
                    .help = std::move(help),
                    .get = {},
                    .set = {}};
        field.get = [member](const void* owner) -> std::optional<Value> {
            const Member& held = static_cast<const Owner*>(owner)->*member;
            if constexpr (requires { held.has_value(); }) {
                if (!held.has_value()) return std::nullopt;
                return Value(Stored(*held));
            } else {
                return Value(Stored(held));
            }
        };
        field.set = [member](void* owner, const Value& value) {
            Member& held = static_cast<Owner*>(owner)->*member;
            if constexpr (requires { held.has_value(); })
                held = static_cast<typename Member::value_type>(std::get<Stored>(value));
            else
                held = static_cast<Member>(std::get<Stored>(value));
        };
        field.clear = [member](void* owner) { static_cast<Owner*>(owner)->*member = Owner{}.*member; };
        record_.fields.push_back(std::move(field));
        return record_.fields.back();
    }

    Record record_;
};

}  // namespace glint
