// Tables of coefficients in C sources: the numbers that a compiler would store, or why not.
#include "oracle/filters/c_array.hpp"

#include <catch2/catch.hpp>
#include <fstream>
#include <iterator>

using namespace halflsb;

namespace {

using Numbers = std::vector<double>;

CoefficientTable table_of(const std::string& text, const CArrayWish& wish = {}) {
    INFO(text);
    auto read = read_c_array(text, wish);
    if (const auto* problem = std::get_if<FileProblem>(&read)) FAIL(problem->problem << "\n  " << problem->remedy);
    return std::get<CoefficientTable>(std::move(read));
}

Numbers numbers_of(const std::string& text, const CArrayWish& wish = {}) { return table_of(text, wish).numbers; }

/// "byte: problem / remedy", or "word: ..."; the text from that byte on for the place.
std::string refusal(const std::string& text, const CArrayWish& wish = {}) {
    const auto read = read_c_array(text, wish);
    const auto* problem = std::get_if<FileProblem>(&read);
    if (problem == nullptr) return "accepted";
    const std::string place = problem->byte ? "at " + text.substr(*problem->byte, 6) : "plan " + problem->word;
    return place + ": " + problem->problem + " / " + problem->remedy;
}

const std::string number = "write the number that the firmware is to have";
const std::string order = "write the numbers in their order, between commas";

}  // namespace

TEST_CASE("c array: integers in every base, with suffixes, signs, parentheses and casts", "[oracle]") {
    CHECK(numbers_of("const int32_t h[] = {1, -2, +3, 0x10, 010, 0b101, 7u, 8L, 9ull, 0XfFU};") ==
          Numbers{1, -2, 3, 16, 8, 5, 7, 8, 9, 255});
    CHECK(numbers_of("constexpr double h[] = {16'384, 0x40'00, 1'0.2'5};") == Numbers{16384, 16384, 10.25});
    CHECK(refusal("double h[] = {0x'1};").starts_with("at 0x'1};: \"0x'1\" is no number in C"));
    CHECK(numbers_of("int16_t h[4] = {(1), (-2), -(3), - -4};") == Numbers{1, -2, -3, 4});
    CHECK(numbers_of("int16_t h[] = {(int16_t)0x7FFF, (int16_t)0x8000, (int16_t) -5, (q15_t)(6), INT16_C(7)};") ==
          Numbers{32767, -32768, -5, 6, 7});
    CHECK(numbers_of("int16_t h[] = {-32768, 32767, -0x8000, 1 << 14, -(1 << 13), 3 * 5 + 2, 7 / -2, -7 % 4};") ==
          Numbers{-32768, 32767, -32768, 16384, -8192, 17, -3, -3});
}

TEST_CASE("c array: the type of the array decides what a bit pattern means", "[oracle]") {
    CHECK(numbers_of("int16_t h[] = {0xFFFF, 0x8000, 0x7FFF, 0177777};") == Numbers{-1, -32768, 32767, -1});
    CHECK(numbers_of("uint16_t h[] = {65535, 0x7FFF, 32768};") == Numbers{65535, 32767, 32768});
    CHECK(refusal("uint16_t h[] = {0x8000};") ==
          "at 0x8000: \"0x8000\" in uint16_t is 32768, but it looks like the bits of a negative number / write "
          "file_word_bits = 16 in the plan if it is negative, or the number as decimal if it is not");
    CHECK(numbers_of("uint16_t h[] = {0xFFFF, 32768, 32767};", {"", 16, false}) == Numbers{-1, -32768, 32767});
    CHECK(numbers_of("int32_t h[] = {0xFFFF, 0xFFFFFFFF, 0x80000000};") == Numbers{65535, -1, -2147483648.0});
    CHECK(numbers_of("int64_t h[] = {0xFFFFFFFF, 0xFFFFFFFFFFFFFFFF};") == Numbers{4294967295.0, -1});
    CHECK(numbers_of("q31_t h[] = {0xC0000000};") == Numbers{-1073741824.0});
    CHECK(numbers_of("int8_t h[] = {0xFF, 127, -128};") == Numbers{-1, 127, -128});
    CHECK(numbers_of("typedef short coefficient; static const coefficient h[2] = {0xFFFF, 1};") == Numbers{-1, 1});
    CHECK(numbers_of("#define coef_t q15_t\nPROGMEM const coef_t h[] = {0x8000};") == Numbers{-32768});
    // int and long have another width on another processor.
    CHECK(numbers_of("int h[] = {40000, 0x7FFF, 0x10000, -1};") == Numbers{40000, 32767, 65536, -1});
    CHECK(refusal("int h[] = {0xFFFF};") ==
          "at 0xFFFF: \"0xFFFF\" in int is negative where it has 16 bits, positive where it has 32 / give the array a "
          "type of stated width, or write file_word_bits in the plan");
    CHECK(numbers_of("int h[] = {0xFFFF};", {"", 16, false}) == Numbers{-1});
    CHECK(numbers_of("int h[] = {0xFFFF};", {"", 32, false}) == Numbers{65535});
    CHECK(refusal("long h[] = {0xFFFFFFFF};").starts_with("at 0xFFFF: \"0xFFFFFFFF\" in long is negative where"));
    CHECK(refusal("struct s h[] = {{0xFFFF, 1}};") ==
          "at 0xFFFF: \"0xFFFF\" could mean a negative number, and the type struct s does not say how wide its words "
          "are / write file_word_bits in the plan, or the number as decimal");
    CHECK(numbers_of("struct s h[] = {{0xFFFF, 1}};", {"", 16, false}) == Numbers{-1, 1});
    CHECK(refusal("int16_t h[] = {1};", {"", 32, false}) ==
          "plan file_word_bits: file_word_bits = 32, and the array is of int16_t / leave file_word_bits out: the type "
          "says it");
}

TEST_CASE("c array: what does not fit the word is refused on both sides of its ends", "[oracle]") {
    const std::string signed_16 = " does not fit int16_t / give a number from -32768 to 32767";
    CHECK(refusal("int16_t h[] = {32767}; ") == "accepted");
    CHECK(refusal("int16_t h[] = {32768}; ") == "at 32768}: \"32768\"" + signed_16);
    CHECK(refusal("int16_t h[] = {-32769};") == "at -32769: \"-32769\"" + signed_16);
    CHECK(refusal("int16_t h[] = {0x10000};") == "at 0x1000: \"0x10000\"" + signed_16);
    CHECK(refusal("int16_t h[] = {(int8_t)128};").find("does not fit int8_t") != std::string::npos);
    CHECK(refusal("uint16_t h[] = {65535};") == "accepted");
    CHECK(refusal("uint16_t h[] = {65536};") ==
          "at 65536}: \"65536\" does not fit uint16_t / give a number from 0 to 65535");
    CHECK(refusal("uint16_t h[] = {-1};").starts_with("at -1};: \"-1\" does not fit"));
    CHECK(
        refusal("int16_t h[] = {0.5};") ==
        "at 0.5};: \"0.5\" in an array of int16_t loses its fraction / write the integer that the firmware is to have");
    CHECK(numbers_of("int16_t h[] = {16384.0, -1.f};") == Numbers{16384, -1});
    CHECK(refusal("int64_t h[] = {9007199254740992};") == "accepted");
    CHECK(refusal("int64_t h[] = {9007199254740993};") ==
          "at 900719: \"9007199254740993\" has more than the 53 bits that a reference in double can hold / give "
          "coefficients of at most 53 bits");
    CHECK(refusal("int64_t h[] = {9223372036854775808};")
              .find("does not fit int64_t / give a number from -2^63 to 2^63 - 1") != std::string::npos);
    CHECK(refusal("int64_t h[] = {18446744073709551616};") ==
          "at 184467: \"18446744073709551616\" is beyond 64 bits / a coefficient has at most 64 bits");
    CHECK(refusal("char h[] = {127};") == "accepted");
    CHECK(refusal("char h[] = {-1};") ==
          "at -1};: \"-1\" in a char is negative on one processor and positive on another / give the array the type "
          "int8_t or uint8_t");
    CHECK(refusal("int16_t h[] = {08};") ==
          "at 08};: \"08\" begins with 0, so C reads it as octal / leave the leading 0 out if it is decimal");
    CHECK(refusal("int16_t h[] = {-1u};") ==
          "at -1u};: a minus before an unsigned number, which stays positive in C / " + number);
}

TEST_CASE("c array: floats are rounded as the array stores them", "[oracle]") {
    CHECK(numbers_of("float h[] = {0.1, 0.1f, 1, -.5, 1.e-3};") ==
          Numbers{static_cast<double>(0.1F), static_cast<double>(0.1F), 1, -0.5, static_cast<double>(1e-3F)});
    CHECK(numbers_of("double h[] = {0.1, 0.1f, 0x1.8p-2, 0x.8p0f};") ==
          Numbers{0.1, static_cast<double>(0.1F), 0.375, 0.5});
    CHECK(numbers_of("const float32_t h[] = {(float)0.1};") == Numbers{static_cast<double>(0.1F)});
    CHECK(refusal("double h[] = {0.1L};") ==
          "at 0.1L};: \"0.1L\" is a long double, whose width depends on the processor / write it without the suffix L");
    const std::string how = " / write a decimal, hexadecimal or octal integer, or a floating constant, as C has them";
    CHECK(refusal("double h[] = {1e999};") == "at 1e999}: \"1e999\" is no number in C" + how);
    CHECK(refusal("double h[] = {0x1.8};") == "at 0x1.8}: \"0x1.8\" is no number in C" + how);
    CHECK(refusal("double h[] = {0.5q};") == "at 0.5q};: \"0.5q\" is no number in C" + how);
    CHECK(refusal("float h[] = {1e39};") == "at 1e39};: \"1e39\" does not fit float / give the array the type double");
    CHECK(refusal("double h[] = {0.5 * 2};") ==
          "at * 2};: a calculation with fractions, which compilers may round differently / " + number);
    CHECK(refusal("_Float16 h[] = {1};") ==
          "at 1};: elements of type _Float16 are not read / name an array of integers, float or double");
    CHECK(refusal("const int16_t *h[] = {0};").find("elements of type pointer") != std::string::npos);
}

TEST_CASE("c array: sizes, and zeros that fill an array up", "[oracle]") {
    CHECK(numbers_of("int16_t h[4] = {1, 2};") == Numbers{1, 2, 0, 0});
    CHECK(numbers_of("#define N 3 /* taps */\nint16_t h[N + 1] = {1, 2,};") == Numbers{1, 2, 0, 0});
    CHECK(numbers_of("#define A (1 << 1)\n#define N A\nint16_t h[2 * N] = {1};") == Numbers{1, 0, 0, 0});
    CHECK(refusal("int16_t h[2] = {1, 2, 3};") ==
          "at 3};: the array has 3 numbers, its size is 2 / correct the size, or the numbers");
    CHECK(
        refusal("int16_t h[TAPS] = {1, 2};") ==
        "at TAPS] : the size of the array: \"TAPS\" is not known in this file / write the size as a number, or say in "
        "the plan how many there are: file_count");
    CHECK(numbers_of("int16_t h[TAPS] = {1, 2};", {"", {}, true}) == Numbers{1, 2});
    CHECK(refusal("int16_t h[0] = {1};") ==
          "at 0] = {: this is no size of an array of coefficients / give a whole number from 1 to 262144");
    CHECK(refusal("int16_t h[999999] = {1};").find("this is no size") != std::string::npos);
    CHECK(refusal("int16_t h[] = {};") == "at };: there is no number in these braces / " + order);
    CHECK(refusal("int16_t h[2][3][4] = {1};") ==
          "at h[2][3: the array has 3 dimensions / give an array of one dimension, or of two with a section a row");
    CHECK(refusal("int16_t h[4000][4000] = {1};").find("more than 262144 numbers") != std::string::npos);
}

TEST_CASE("c array: rows of two dimensions, of structs, and flat", "[oracle]") {
    const CoefficientTable two = table_of("int16_t h[3][4] = {{1, 2}, {3, 4, 5, 6}};");
    CHECK(two.numbers == Numbers{1, 2, 0, 0, 3, 4, 5, 6, 0, 0, 0, 0});
    CHECK(two.row_numbers == 4);
    CHECK(two.is_integer_type);
    CHECK(two.type_name == "int16_t");
    const CoefficientTable flat = table_of("float h[][3] = {1, 2, 3, 4};");
    CHECK(flat.numbers == Numbers{1, 2, 3, 4, 0, 0});
    CHECK(flat.row_numbers == 3);
    CHECK(!flat.is_integer_type);
    const CoefficientTable structs = table_of(
        "struct section { int16_t b[3], a[2]; };\nstatic const struct section h[3] = {{{1, 2, 3}, {4, 5}}, {6, "
        "7, 8, 9, 10}};");
    CHECK(structs.numbers == Numbers{1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 0, 0, 0, 0, 0});
    CHECK(structs.row_numbers == 5);
    CHECK(!structs.is_integer_type);
    CHECK(numbers_of("const struct section notch = {{1, 2, 3}, {4, 5}};", {"notch", {}, false}) ==
          Numbers{1, 2, 3, 4, 5});
    CHECK(refusal("struct s h[] = {{1, 2, 3}, {4, 5}};") ==
          "at 4, 5}}: this row has 2 numbers, the first one has 3 / give each row the same count of numbers");
    CHECK(refusal("int16_t h[2][2] = {{1, 2, 3}};") ==
          "at 1, 2, : this row has 3 numbers, its array says 2 / give each row the same count of numbers");
    CHECK(refusal("int16_t h[2][2] = {{1, 2}, 3, 4};") ==
          "at 3, 4};: numbers and braces stand side by side / put each row into braces, or none");
    CHECK(refusal("int16_t h[] = {{1}, {2}};") == "at {1}, {: braces around a number of int16_t / " + order);
    CHECK(refusal("int16_t h[] = {[1] = 5};") ==
          "at [1] = : a designated initialiser chooses its own order / " + order);
    CHECK(refusal("struct s h[] = {{.b0 = 5}};").find("a designated initialiser") != std::string::npos);
}

TEST_CASE("c array: comments, continued lines and attributes change nothing", "[oracle]") {
    CHECK(numbers_of("/* taps[] = {9}; */ // int x[] = {8}; \\\n int y[] = {7};\n"
                     "static const int16_t h[3] __attribute__((section(\".ccm\"), aligned(4))) = {\r\n"
                     "  1, /* one */\\\n 2, // two \\\n 4,\n 3\n};\n") == Numbers{1, 2, 3});
    CHECK(numbers_of("#ifndef H_H\n#define H_H\n#ifdef __cplusplus\nextern \"C\" {\n#endif\n"
                     "extern const int16_t h[2];\nvoid run(int16_t x[2], int n);\n"
                     "const char name[] = \"a \\\" { [ \";\nstatic inline int f(int a) { int k = a; return k * 2; }\n"
                     "__attribute__((aligned(4))) const int16_t h[2] PROGMEM = {1, 2};\n#endif\n") == Numbers{1, 2});
    CHECK(numbers_of("#define TAPS {1, 2, \\\n 3}\nint16_t h[] = TAPS;") == Numbers{1, 2, 3});
    CHECK(numbers_of("#define B0 16384\n#define B1 (-B0)\nint16_t h[] = {B0, B1};") == Numbers{16384, -16384});
    CHECK(numbers_of("constexpr std::array<int16_t, 3> h = {{1, 0xFFFF}};") == Numbers{1, -1, 0});
    CHECK(numbers_of("std::array<float, 2> h{1, 2};") == Numbers{1, 2});
    CHECK(numbers_of("std::array<section, 2> h = {{{1, 2}, {3, 4}}};") == Numbers{1, 2, 3, 4});
    // As an array includes it.
    CHECK(numbers_of("/* 4 taps */ 1, -2,\n 0x10, 4,\n") == Numbers{1, -2, 16, 4});
    CHECK(table_of("{1, 2},\n{3, 4}\n").row_numbers == 2);
}

TEST_CASE("c array: several arrays are told apart by name", "[oracle]") {
    const std::string two = "int16_t low[2] = {1, 2}, high[] = {0xFFFF};\nstruct s one = {5};\n";
    CHECK(numbers_of(two, {"low", {}, false}) == Numbers{1, 2});
    CHECK(numbers_of(two, {"high", {}, false}) == Numbers{-1});
    CHECK(numbers_of(two, {"one", {}, false}) == Numbers{5});
    CHECK(refusal(two) == "plan : the file holds 2 arrays: low, high / choose one, for example file_array = \"low\"");
    CHECK(refusal(two, {"mid", {}, false}) ==
          "plan file_array: file_array = \"mid\": the file has no such array / its arrays are low, high");
    CHECK(refusal("extern const int16_t h[4];") ==
          "at extern: there is no array with numbers in the file / name the file that holds the numbers: a header may "
          "only declare the array");
    // What an #if chooses cannot be known, but #if 0 can.
    const std::string choice = "#if WIDE\nint32_t h[] = {1};\n#else\nint16_t h[] = {2};\n#endif\n";
    CHECK(
        refusal(choice, {"h", {}, false}) ==
        "at h[] = : a second array is called \"h\" / which one is compiled cannot be seen here: put the firmware's own "
        "into a file of its own");
    CHECK(numbers_of("#if 0\nint32_t h[] = {1}; don't\n#else\nint16_t h[] = {2};\n#endif\n") == Numbers{2});
    CHECK(
        numbers_of("#if 1 // this\nint16_t h[] = {1};\n#elif X\nint h[] = {9};\n#else\nint16_t h[] = {2};\n#endif\n") ==
        Numbers{1});
    CHECK(numbers_of("int16_t h[] = {1,\n#if 0\n9,\n#endif\n#pragma once\n2};") == Numbers{1, 2});
}

TEST_CASE("c array: what only a compiler could tell is refused at its place", "[oracle]") {
    CHECK(refusal("int16_t h[] = {Q15(0.5)};") ==
          "at Q15(0.: \"Q15\" is called here, and what it gives is the compiler's to say / write the numbers that it "
          "gives, or print them by a program into a file of numbers");
    CHECK(refusal("int16_t h[] = {B0};") ==
          "at B0};: \"B0\" is not known in this file / write the number, or #define it as a number before the array");
    CHECK(refusal("int16_t h[] = {B0};\n#define B0 5\n").starts_with("at B0};\n#: \"B0\" is not known"));
    CHECK(refusal("#define B0 5\n#undef B0\nint16_t h[] = {B0};").find("is defined more than once") !=
          std::string::npos);
    CHECK(refusal("#define B0 1 + 1\nint16_t h[] = {B0};") ==
          "at B0};: \"B0\" stands for more than one number / put its text into parentheses, or write the number");
    CHECK(
        refusal("#define B0 Q(1)\nint16_t h[] = {B0};").starts_with("at B0};: \"B0\" stands for no number: \"Q\" is"));
    CHECK(refusal("#define A B\n#define B Q(1)\nint16_t h[] = {A};")
              .starts_with("at A};: \"B\" stands for no number: \"Q\""));
    CHECK(refusal("#define B(x) x\nint16_t h[] = {B};") ==
          "at B};: \"B\" is no number of this file / write the number");
    CHECK(
        refusal("#ifndef B0\n#define B0 5\n#endif\nint16_t h[] = {B0};") ==
        "at B0};: \"B0\" is defined unless the compiler's options define it / write the number, or #define it without "
        "#ifndef around it");
    CHECK(numbers_of("#ifndef H\n#define H\n#define B0 5\nint16_t h[] = {B0};\n#endif\n") == Numbers{5});
    CHECK(refusal("#define A A\nint16_t h[] = {A};").find("this expression is too deep") != std::string::npos);
    CHECK(
        refusal("int16_t h[] = {\n#include \"taps.inc\"\n};") ==
        "at #inclu: \"#include\" stands inside the array / give the file as the compiler sees it, without lines of the "
        "preprocessor in the array");
    CHECK(refusal("int16_t h[] = {1,\n#ifdef X\n2,\n#endif\n3};").starts_with("at #ifdef: \"#ifdef\" stands inside"));
    CHECK(refusal("int16_t h[] = {1 2};") ==
          "at 2};: a comma is missing before \"2\" / write numbers between commas, as C has them");
    CHECK(refusal("int16_t h[] = {1,, 2};") ==
          "at , 2};: a number is missing before \",\" / write numbers between commas, as C has them");
    CHECK(refusal("int16_t h[] = {\"a\"};") == "at \"a\"};: \"\"a\"\" is no number / name an array of numbers");
    CHECK(refusal("int16_t h[] = {~0};") == "at ~0};: \"~\" changes the bits of a number / " + number);
    CHECK(refusal("int16_t h[] = {(1};") == "at };: a ) is missing here / " + number);
    CHECK(refusal("int16_t h[] = {(int16_t 1};").find("a ) is missing behind this cast") != std::string::npos);
    CHECK(refusal("int16_t h[] = {(const coef_t)1};").find("a cast to \"coef_t\", which is not known") !=
          std::string::npos);
    CHECK(refusal("int16_t h[] = {1, 2") == "at 2: the array has no end / is the file whole?");
    CHECK(refusal("int16_t h[] = {1,").find("a number is missing at the end") != std::string::npos);
    CHECK(refusal("int16_t h[] = {1 / 0};") == "at / 0};: a division by 0 / " + number);
    CHECK(refusal("int16_t h[] = {1 << 31};") ==
          "at << 31}: a shift of a negative number, or by more than 30 bits / " + number);
    CHECK(refusal("int32_t h[] = {65536 * 65536};") == "at * 6553: a calculation beyond the range of int / " + number);
    CHECK(refusal("int16_t h[][] = {1};") ==
          "at h[][] : the length of a row is not stated / write it into the second brackets");
    CHECK(refusal("/* int16_t h[] = {1};") == "at /* int: this comment has no end / write */ behind it");
    CHECK(refusal("char* s = \"a\n\";") ==
          "at \"a\n\";: this quotation mark is not closed in its line / close it, or put the array into a file of its "
          "own");
    CHECK(refusal("auto s = R\"(a)\";") ==
          "at R\"(a)\": a raw string is not read here / put the array into a file of its own");
    CHECK(refusal("#if X\nint16_t h[] = {1};") == "at #if X\n: this #if has no #endif / is the file whole?");
    CHECK(refusal("#endif\n") == "at #endif: this #endif has no #if / is the file whole?");
    CHECK(refusal("#else\n") == "at #else\n: this #else has no #if / is the file whole?");
    CHECK(refusal(std::string("int16_t h[] = {") + std::string(300, '(') + "1").find("too deep") != std::string::npos);
    CHECK(refusal(std::string("struct s h[] = ") + std::string(300, '{') + "1").find("braces stand too deep") !=
          std::string::npos);
}

TEST_CASE("c array: sizes of files and lists are bounded on both sides", "[oracle]") {
    std::string many = "int8_t h[] = {";
    for (int i = 0; i < 262144; ++i) many += "1,";
    CHECK(numbers_of(many + "};").size() == 262144);
    CHECK(refusal(many + "1};") == "at 1};: there are more than 262144 numbers / " + order);
    std::string words = "int8_t h[] = {1};";
    while (words.size() < 1'000'100) words += ";";
    CHECK(refusal(words).find("the file has more than 1000000 words") != std::string::npos);
    std::string deep;
    for (int i = 0; i < 65; ++i) deep += "#if X\n";
    CHECK(refusal(deep).find("more than 64 #if stand in each other") != std::string::npos);
}
