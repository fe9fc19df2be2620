// What is no TOML: such a message stands alone.
#include <string>
#include <vector>

#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct Slip {
    std::string_view done;
    std::string text;
};

std::vector<Slip> slips() {
    std::string deep = "a";
    for (int part = 0; part < 65; ++part) deep += ".a";
    return {
        {"a repeated key", "title = \"a\"\ntitle = \"b\"\n"},
        {"a repeated header", "[signal]\nrate_hz = 1\n[signal]\n"},
        {"a list after a table", "[case]\nname = \"a\"\n[[case]]\n"},
        {"a table after a list", "[[rule]]\n[rule]\n"},
        {"a missing [[case]]", "[[case]]\nname = \"a\"\n[case.stimulus]\n[case.stimulus]\n"},
        {"a line break in an inline table", "x = { a = 1,\n  b = 2 }\n"},
        {"a comma too many in an inline table", "x = { a = 1, }\n"},
        {"a string that does not end on its line", "title = \"abc\nx = 1\n"},
        {"a string that does not end at all", "title = \"abc"},
        {"an array that does not end", "x = [1, 2"},
        {"an inline table that does not end", "x = { a = 1"},
        {"a header that does not end", "[signal"},
        {"no value", "x =\ny = 1\n"},
        {"no value at the end of the file", "x ="},
        {"no =", "x\n"},
        {"a word without quotation marks", "x = half\n"},
        {"a decimal comma", "x = 0,5\n"},
        {"a whole number of 67 bits", "x = 99999999999999999999\n"},
        {"two decimal points", "x = 0.5.5\n"},
        {"an escape that is none", "x = \"C:\\flash\\quick\"\n"},
        {"a control character", "x = \"\x01\"\n"},
        {"two commas in an array", "x = [1,, 2]\n"},
        {"a header that begins with a sign", "[@1"},
        {"a key of 66 parts", deep + " = 1\n"},
        {"a byte that is no UTF-8", "title = \"\xff\"\n"},
        {"a byte that is no text", std::string("title = \"a\0\"\n", 12)},
    };
}

}  // namespace

void toml_chapter(Page& page) {
    page.chapter("The language of both files, TOML");
    for (const Slip& slip : slips()) show_plan(page, slip.done, slip.text);
}

}  // namespace halflsb::diagnostics
