// A record as XML text that reads back equal.
#include <glint/design/record_file.h>

#include <tinyxml2.h>

namespace glint {
namespace {

void write(const Record& record, void* owner, tinyxml2::XMLPrinter& printer) {
    printer.OpenElement(record.name.c_str());
    for (const Field& field : record.fields) {
        if (!applies(record, field, owner)) continue;
        const std::optional<Value> value = field.get(owner);
        if (!value) continue;
        const std::string text = format_value(field, *value);
        // An empty text or file name is the same as none given.
        if (!text.empty()) printer.PushAttribute(field.name.c_str(), text.c_str());
    }
    for (const Part& part : record.parts) write(part.of(), part.inside(owner), printer);
    for (const Sequence& sequence : record.sequence)
        for (std::size_t i = 0; i < sequence.size(owner); ++i)
            write(sequence.kinds[sequence.kind_of(owner, i)], sequence.item(owner, i), printer);
    printer.CloseElement();
}

}  // namespace

std::string write_record(const Record& record, const void* source) {
    tinyxml2::XMLPrinter printer;
    write(record, const_cast<void*>(source),
          printer);  // the walkers share one untyped access; nothing is changed
    return printer.CStr();
}

}  // namespace glint
