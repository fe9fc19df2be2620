// What is no TOML: the message stands alone, whatever else is wrong, because the library stops there.
#include "tests/support/config_texts.hpp"

using namespace halflsb;

TEST_CASE("toml: a repeated key is refused alone, at the second key", "[config]") {
    CHECK(plan_problems("title = \"a\"\nnonsense = 1\ntitle   = \"b\"\n") ==
          "plan.toml:3:1: the key \"title\" is repeated\n"
          "    title   = \"b\"\n"
          "    ^\n"
          "  keep one of the two\n");
    CHECK(plan_problems("x = { a = 1, a = 2 }\n") ==
          "plan.toml:1:14: the key \"a\" is repeated\n"
          "    x = { a = 1, a = 2 }\n"
          "                 ^\n"
          "  keep one of the two\n");
    CHECK(plan_problems("[signal]\nrate_hz = 1\n[signal]\n") ==
          "plan.toml:3:1: the header [signal] is repeated\n"
          "    [signal]\n"
          "    ^\n"
          "  put its keys under one header\n");
}

TEST_CASE("toml: a forgotten [[case]] between two stimuli is told by its name", "[config]") {
    CHECK(plan_problems(with(good_plan, "[[case]]\nname = \"tare step\"\n", "")) ==
          "plan.toml:28:1: a second [case.stimulus] in one [[case]]: a [[case]] is missing above it\n"
          "    [case.stimulus]\n"
          "    ^\n"
          "  start the next case with [[case]] and its name, then [case.stimulus]\n");
}

TEST_CASE("toml: a line break in an inline table", "[config]") {
    const std::string remedy = "  TOML wants { ... } on one line; or give the table a header of its own\n";
    CHECK(plan_problems(with(good_plan, "to_hz = 100.0, min_db", "to_hz = 100.0,\n  min_db")) ==
          "plan.toml:26:42: a line break in an inline table\n"
          "    bands = [{ from_hz = 10.0, to_hz = 100.0,\n"
          "                                             ^\n" +
              remedy);
    CHECK(plan_problems("x = { a = 1\n}\n") ==
          "plan.toml:1:12: a line break in an inline table\n    x = { a = 1\n               ^\n" + remedy);
    CHECK(plan_problems("x = {\r\na = 1 }\r\n") ==
          "plan.toml:1:6: a line break in an inline table\n    x = {\n         ^\n" + remedy);
    CHECK(plan_problems("x = { a = 1, # why\nb = 2 }\n") ==
          "plan.toml:1:14: a line break in an inline table\n    x = { a = 1, # why\n                 ^\n" + remedy);
    CHECK(plan_problems("x = { a = 1, }\n") ==
          "plan.toml:1:14: a comma without a key in an inline table\n    x = { a = 1, }\n                 ^\n  remove "
          "the comma\n");
}

TEST_CASE("toml: a single table where a list was begun, and the other way round", "[config]") {
    CHECK(plan_problems("[case]\nname = \"a\"\n[[case]]\n") ==
          "plan.toml:3:1: [[case]] after [case]\n    [[case]]\n    ^\n  write [[case]] each time, it is a list\n");
    CHECK(plan_problems("[[rule]]\n[rule]\n") ==
          "plan.toml:2:1: [rule] after [[rule]]\n    [rule]\n    ^\n  write [[rule]] each time, it is a list\n");
}

TEST_CASE("toml: each kind of slip says what to write", "[config]") {
    const auto slip = [](const std::string& line) { return plan_problems(line); };
    const std::string key_value = "  write key = value\n";
    CHECK(slip("title = \"abc\nx = 1\n") ==
          "plan.toml:1:13: the string does not end on its line\n    title = \"abc\n                ^\n  close the "
          "string with a quotation mark\n");
    CHECK(slip("title = \"abc") ==
          "plan.toml:1:13: the file ends inside a string\n    title = \"abc\n                ^\n  close the string "
          "with a quotation mark\n");
    CHECK(slip("x = [1, 2") ==
          "plan.toml:1:10: the file ends inside a list\n    x = [1, 2\n             ^\n  close the list with ]\n");
    CHECK(slip("x = { a = 1") ==
          "plan.toml:1:12: the file ends inside an inline table\n    x = { a = 1\n               ^\n  close the table "
          "with }\n");
    CHECK(slip("[signal") ==
          "plan.toml:1:8: the file ends inside a header\n    [signal\n           ^\n  close the header with ]\n");
    CHECK(slip("x =") == "plan.toml:1:4: the value is missing\n    x =\n       ^\n" + key_value);
    CHECK(slip("x =\ny = 1\n") == "plan.toml:1:4: the value is missing\n    x =\n       ^\n" + key_value);
    CHECK(slip("x\n") == "plan.toml:1:2: an = is missing after the key\n    x\n     ^\n" + key_value);
    CHECK(slip("x = half\n") ==
          "plan.toml:1:5: this is not a value\n    x = half\n        ^\n"
          "  text stands in quotation marks; a number has a decimal point, not a comma; true and false are in small "
          "letters\n");
    CHECK(slip("x = 0,5\n") ==
          "plan.toml:1:6: something stands behind the value\n    x = 0,5\n         ^\n"
          "  one key = value on a line; a number has a decimal point, not a comma; a list stands in [ ]\n");
    CHECK(slip("x = 99999999999999999999\n") ==
          "plan.toml:1:25: the number does not fit into 64 bits\n    x = 99999999999999999999\n                        "
          "    ^\n  give a smaller number\n");
    CHECK(slip("x = 0.5.5\n") ==
          "plan.toml:1:8: this is not a number: expected decimal digit or exponent, saw '.'\n    x = 0.5.5\n           "
          "^\n"
          "  write numbers like 12, -3, 0.5 or 1e-6\n");
    CHECK(slip("x = \"\\q\"\n") ==
          "plan.toml:1:7: unknown escape sequence '\\q'\n    x = \"\\q\"\n          ^\n"
          "  double the backslash, or put the string in single quotation marks\n");
    CHECK(slip("x = \"\x01\"\n") ==
          "plan.toml:1:6: a control character in a string\n    x = \"\\x01\"\n         ^\n  write it as an escape, "
          "\\u001b for example\n");
    CHECK(slip("[@1") ==
          "plan.toml:1:2: expected bare key starting character or string delimiter, saw '@'\n    [@1\n     ^\n"
          "  a line is key = value, [table], [[list of tables]] or # a comment\n");
}

TEST_CASE("toml: a key of a hundred thousand parts is refused before it can exhaust the stack", "[config]") {
    std::string key = "a";
    for (int i = 0; i < 100000; ++i) key += ".a";
    for (const std::string& text : {key + " = 1\n", "[" + key + "]\n", "x = {" + key + " = 1}\n"}) {
        const std::string said = plan_problems(text);
        CHECK(said.find("a key of more than 64 parts\n") != std::string::npos);
        CHECK(said.find("\n  no key here has more than 3\n") != std::string::npos);
    }
    std::string quoted_key = "\"=\"";
    for (int i = 0; i < 100000; ++i) quoted_key += ".\"=\"";
    CHECK(plan_problems(quoted_key + " = 1\n").find("a key of more than 64 parts") != std::string::npos);
    // Numbers with points are no key.
    std::string taps = "taps = [0.5";
    for (int i = 0; i < 1000; ++i) taps += ", 0.5";
    CHECK(plan_problems(with(good_plan, "taps = [0.25, 0.5, 0.25]", taps + "]")).find("more than 64 parts") ==
          std::string::npos);
    const std::string nested = "x = " + std::string(100000, '[');
    CHECK(plan_problems(nested).starts_with("plan.toml:1:"));
}
