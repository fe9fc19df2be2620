#include "runner/config/syntax_message.hpp"

#include <algorithm>

#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

struct Message {
    Place place;
    std::string problem, remedy;
};

bool has(std::string_view text, std::string_view part) { return text.find(part) != std::string_view::npos; }

/// What stands between the first pair of single quotes.
std::string_view name_in_quotes(std::string_view detail) {
    const std::size_t begin = detail.find('\'');
    if (begin == std::string_view::npos) return {};
    const std::size_t end = detail.find('\'', begin + 1);
    return end == std::string_view::npos ? std::string_view{} : detail.substr(begin + 1, end - begin - 1);
}

/// The library points at the value of a repeated key; people look for the key. ASCII only, else `place`.
Place key_before(const SourceText& source, Place place) {
    const std::string_view line = source.line(place.line);
    const auto upto = std::min(line.size(), static_cast<std::size_t>(place.column - 1));
    if (std::any_of(line.begin(), line.begin() + static_cast<std::ptrdiff_t>(upto),
                    [](char c) { return (c & '\x80') != 0; }))
        return place;
    const std::size_t equals = line.substr(0, upto).rfind('=');
    if (equals == std::string_view::npos) return place;
    const std::size_t last = line.substr(0, equals).find_last_not_of(" \t");
    if (last == std::string_view::npos) return place;
    const std::size_t before = line.substr(0, last + 1).find_last_of(" \t{,");
    return {place.line, static_cast<int>(before == std::string_view::npos ? 1 : before + 2)};
}

Message redefinition(const SourceText& source, Place place, std::string_view context, std::string_view detail) {
    const std::string name(name_in_quotes(detail));
    const std::string shown = printable(name);
    if (context != "table header") {
        return {key_before(source, place), "the key " + quoted(name) + " is repeated", "keep one of the two"};
    }
    if (has(detail, "as array-of-tables")) {
        return {place, "[[" + shown + "]] after [" + shown + "]", "write [[" + shown + "]] each time, it is a list"};
    }
    if (has(detail, "existing array")) {
        return {place, "[" + shown + "] after [[" + shown + "]]", "write [[" + shown + "]] each time, it is a list"};
    }
    const std::size_t dot = name.find('.');
    const std::string outer = printable(name.substr(0, dot));
    if (dot != std::string::npos && has(source.bytes(), "[[" + name.substr(0, dot) + "]]")) {
        return {place, "a second [" + shown + "] in one [[" + outer + "]]: a [[" + outer + "]] is missing above it",
                "start the next " + outer + " with [[" + outer + "]] and its name, then [" + shown + "]"};
    }
    return {place, "the header [" + shown + "] is repeated", "put its keys under one header"};
}

Message end_of_file(Place place, std::string_view context) {
    if (has(context, "string"))
        return {place, "the file ends inside a string", "close the string with a quotation mark"};
    if (has(context, "array")) return {place, "the file ends inside a list", "close the list with ]"};
    if (has(context, "inline table")) return {place, "the file ends inside an inline table", "close the table with }"};
    if (has(context, "header")) return {place, "the file ends inside a header", "close the header with ]"};
    return {place, "the value is missing", "write key = value"};
}

Message message_for(const SourceText& source, Place place, std::string_view context, std::string_view detail) {
    const bool at_line_end = has(detail, "saw '\\n'") || has(detail, "saw '\\r'") || has(detail, "saw '#'");
    if (has(detail, "cannot redefine existing")) return redefinition(source, place, context, detail);
    if (has(context, "inline table") && at_line_end) {
        return {place, "a line break in an inline table",
                "TOML wants { ... } on one line; or give the table a header of its own"};
    }
    if (has(context, "inline table") && (has(detail, "dangling comma") || has(detail, "saw comma"))) {
        return {place, "a comma without a key in an inline table", "remove the comma"};
    }
    if (has(context, "header") && has(detail, "expected ']'"))
        return {place, "the header is not closed", "close it with ], one of a list with ]]"};
    if (has(detail, "end-of-file") || has(detail, "saw EOF")) return end_of_file(place, context);
    if (has(context, "string") && has(detail, "control characters")) {
        const bool line_ends = static_cast<std::size_t>(place.column) > columns_of(source.line(place.line));
        if (line_ends) return {place, "the string does not end on its line", "close the string with a quotation mark"};
        return {place, "a control character in a string", "write it as an escape, \\u001b for example"};
    }
    if (has(detail, "unknown escape sequence")) {
        return {place, printable(detail), "double the backslash, or put the string in single quotation marks"};
    }
    if (has(detail, "expected '='")) return {place, "an = is missing after the key", "write key = value"};
    if (has(detail, "expected value,")) return {place, "the value is missing", "write key = value"};
    if (has(detail, "could not determine value type")) {
        return {place, "this is not a value",
                "text stands in quotation marks; a number has a decimal point, not a comma; true and false are in "
                "small letters"};
    }
    if (has(detail, "expected a comment or whitespace")) {
        return {place, "something stands behind the value",
                "one key = value on a line; a number has a decimal point, not a comma; a list stands in [ ]"};
    }
    if (has(detail, "not representable in 64 bits"))
        return {place, "the number does not fit into 64 bits", "give a smaller number"};
    if (has(context, "integer") || has(context, "floating-point")) {
        return {place, "this is not a number: " + printable(detail), "write numbers like 12, -3, 0.5 or 1e-6"};
    }
    if (has(context, "array")) return {place, "in a list: " + printable(detail), "write lists like [1, 2, 3]"};
    return {place, printable(detail), "a line is key = value, [table], [[list of tables]] or # a comment"};
}

}  // namespace

std::string syntax_message(const SourceText& source, Place place, std::string_view description) {
    constexpr std::string_view opening = "Error while parsing ";
    std::string_view context, detail = description;
    if (description.starts_with(opening)) {
        if (const std::size_t colon = description.find(": "); colon != std::string_view::npos) {
            context = description.substr(opening.size(), colon - opening.size());
            detail = description.substr(colon + 2);
        }
    }
    const Message message = message_for(source, place, context, detail);
    return source.render(message.place, message.problem, message.remedy);
}

}  // namespace halflsb
