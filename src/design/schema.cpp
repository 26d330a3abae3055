// An XML Schema 1.0 from a record.
#include <glint/design/reference.h>

#include <fmt/format.h>

namespace glint {
namespace {

std::string escaped(std::string_view text) {
    std::string out;
    for (const char c : text) {
        if (c == '&')
            out += "&amp;";
        else if (c == '<')
            out += "&lt;";
        else if (c == '>')
            out += "&gt;";
        else if (c == '"')
            out += "&quot;";
        else
            out += c;
    }
    return out;
}

// Type of a quantity attribute: a decimal number and one of the units.
std::string quantity_type(Kind kind) {
    std::string units;
    bool optional = units_of(kind).empty();
    for (const Unit& unit : units_of(kind)) {
        if (unit.symbol.empty()) {
            optional = true;
            continue;
        }
        units += (units.empty() ? "" : "|") + std::string(unit.symbol);
    }
    const std::string number = R"(\s*[+\-]?([0-9]+(\.[0-9]*)?|\.[0-9]+)([eE][+\-]?[0-9]+)?\s*)";
    const std::string suffix = units.empty() ? "" : fmt::format("({}){}", units, optional ? "?" : "");
    return fmt::format("<xs:restriction base=\"xs:string\"><xs:pattern value=\"{}{}\\s*\"/></xs:restriction>",
                       number, suffix);
}

std::string type_of(const Field& field) {
    switch (field.type) {
        case FieldType::quantity:
            return quantity_type(field.kind);
        case FieldType::integer:
            return "<xs:restriction base=\"xs:integer\"/>";
        case FieldType::choice: {
            std::string names;
            for (const std::string& choice : field.choices)
                names += fmt::format("<xs:enumeration value=\"{}\"/>", escaped(choice));
            return "<xs:restriction base=\"xs:string\">" + names + "</xs:restriction>";
        }
        case FieldType::text:
        case FieldType::file:
            return "<xs:restriction base=\"xs:string\"/>";
    }
    return {};
}

void element(const Record& record, std::string_view occurs, int depth, std::string& out) {
    const std::string indent(static_cast<std::size_t>(depth) * 2, ' ');
    out += fmt::format("{}<xs:element name=\"{}\"{}>\n", indent, record.name, occurs);
    out += fmt::format("{}  <xs:annotation><xs:documentation>{}</xs:documentation></xs:annotation>\n", indent,
                       escaped(record.help));
    out += indent + "  <xs:complexType>\n";
    if (!record.parts.empty()) {
        out += indent + "    <xs:all>\n";
        for (const Part& part : record.parts) element(part.of(), " minOccurs=\"0\"", depth + 3, out);
        out += indent + "    </xs:all>\n";
    }
    for (const Sequence& sequence : record.sequence) {
        out += indent + "    <xs:choice minOccurs=\"0\" maxOccurs=\"unbounded\">\n";
        for (const Record& kind : sequence.kinds) element(kind, "", depth + 3, out);
        out += indent + "    </xs:choice>\n";
    }
    for (const Field& field : record.fields) {
        const bool always = field.required && field.when.field.empty();
        out += fmt::format("{}    <xs:attribute name=\"{}\" use=\"{}\">\n", indent, field.name,
                           always ? "required" : "optional");
        out += fmt::format(
            "{}      <xs:annotation><xs:documentation>{}; {}</xs:documentation></xs:annotation>\n", indent,
            escaped(field.help), escaped(accepted_by(field)));
        out += fmt::format("{}      <xs:simpleType>{}</xs:simpleType>\n{}    </xs:attribute>\n", indent,
                           type_of(field), indent);
    }
    out += indent + "  </xs:complexType>\n" + indent + "</xs:element>\n";
}

}  // namespace

std::string xml_schema(const Record& record) {
    std::string out =
        "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n<xs:schema "
        "xmlns:xs=\"http://www.w3.org/2001/XMLSchema\">\n";
    element(record, "", 1, out);
    return out + "</xs:schema>\n";
}

}  // namespace glint
