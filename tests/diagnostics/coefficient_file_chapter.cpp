// What a file of coefficients, and the words about it, can be refused for.
#include <string>
#include <vector>

#include "oracle/filters/c_array.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct Source {
    std::string_view done, text;
};

/// Each the file of a FIR in Q15.
const std::vector<Source> c_sources = {
    {"a header that only declares", "extern const int16_t h[4];\n"},
    {"two arrays", "int16_t low[] = {1}, high[] = {2};\n"},
    {"a comment without an end", "/* int16_t h[] = {1};\n"},
    {"a string without an end", "char* s = \"a;\nint16_t h[] = {1};\n"},
    {"a raw string", "auto s = R\"(a)\";\n"},
    {"an #if without #endif", "#if WIDE\nint16_t h[] = {1};\n"},
    {"an #endif without #if", "int16_t h[] = {1};\n#endif\n"},
    {"an #else without #if", "#else\nint16_t h[] = {1};\n"},
    {"a call of a macro", "int16_t h[] = {Q15(0.5)};\n"},
    {"a name of another file", "int16_t h[] = {B0};\n"},
    {"a name that is defined twice", "#define B0 1\n#define B0 2\nint16_t h[] = {B0};\n"},
    {"a name with a default", "#ifndef B0\n#define B0 5\n#endif\nint16_t h[] = {B0};\n"},
    {"a name of a macro with arguments", "#define B0(x) x\nint16_t h[] = {B0};\n"},
    {"a name for two numbers", "#define B 1, 2\nint16_t h[] = {B};\n"},
    {"a name for a call", "#define B Q(1)\nint16_t h[] = {B};\n"},
    {"a name for itself", "#define B B\nint16_t h[] = {B};\n"},
    {"an #ifdef inside the array", "int16_t h[] = {1,\n#ifdef LONG\n2,\n#endif\n};\n"},
    {"a string in the array", "int16_t h[] = {\"a\"};\n"},
    {"a missing comma", "int16_t h[] = {1 2};\n"},
    {"a missing number", "int16_t h[] = {1, , 2};\n"},
    {"an array without an end", "int16_t h[] = {1, 2\n"},
    {"an array that ends behind a comma", "int16_t h[] = {1,\n"},
    {"an array without a number", "int16_t h[] = {};\n"},
    {"a designated initialiser", "int16_t h[4] = {[2] = 1};\n"},
    {"numbers beside braces", "int16_t h[2][2] = {{1, 2}, 3, 4};\n"},
    {"braces around a number", "int16_t h[] = {{1}, {2}};\n"},
    {"braces that are too deep", "struct s h[] = {{{{{1}}}}};\n"},
    {"three dimensions", "int16_t h[1][2][3] = {1};\n"},
    {"rows without a length", "int16_t h[2][] = {{1}};\n"},
    {"a row that is too long", "int16_t h[2][2] = {{1, 2, 3}};\n"},
    {"a row of a struct that is too short", "struct s h[] = {{1, 2, 3}, {1, 2}};\n"},
    {"more numbers than the size", "int16_t h[2] = {1, 2, 3};\n"},
    {"a size of another file", "int16_t h[TAPS] = {1, 2, 3};\n"},
    {"a size that is none", "int16_t h[-2] = {1};\n"},
    {"a size that is too large in all", "int16_t h[4000][4000] = {1};\n"},
    {"no number of C", "float h[] = {0.5q};\n"},
    {"an octal that is none", "int16_t h[] = {0890};\n"},
    {"a number beyond 64 bits", "int64_t h[] = {18446744073709551616};\n"},
    {"a number beyond 53 bits", "int64_t h[] = {9007199254740993};\n"},
    {"a number beyond 53 bits in a float", "double h[] = {9007199254740993};\n"},
    {"a long double", "double h[] = {0.5L};\n"},
    {"a number beyond its word", "int16_t h[] = {40000};\n"},
    {"a negative number in an unsigned word", "uint16_t h[] = {-1};\n"},
    {"a bit pattern in an unsigned word", "uint16_t h[] = {0xFFFF};\n"},
    {"a bit pattern in an int", "int h[] = {0xFFFF};\n"},
    {"a bit pattern in a struct", "struct s h[] = {{0xFFFF}};\n"},
    {"a negative char", "char h[] = {-1};\n"},
    {"a fraction in an integer", "int16_t h[] = {0.5};\n"},
    {"a number beyond float", "float h[] = {1e39};\n"},
    {"pointers", "const int16_t* h[] = {0};\n"},
    {"a cast to an unknown type", "int16_t h[] = {(const coefficient)1};\n"},
    {"a cast without an end", "int16_t h[] = {(int16_t 1};\n"},
    {"a parenthesis without an end", "int16_t h[] = {(1};\n"},
    {"turned bits", "int16_t h[] = {~1};\n"},
    {"a minus before an unsigned number", "int16_t h[] = {-1u};\n"},
    {"a calculation with fractions", "int16_t h[] = {0.5 * 32768};\n"},
    {"a calculation beyond int", "int32_t h[] = {65536 * 65536};\n"},
    {"a shift by too much", "int32_t h[] = {1 << 31};\n"},
    {"a division by 0", "int32_t h[] = {1 / 0};\n"},
};

const std::vector<Source> texts = {
    {"a row whose count differs", "1,2,3\n1,2\n"},
    {"a line with a decimal comma among others", "0.5\n0,25\n"},
    {"twice the numbers, as decimal commas would give them", "1,5\n1,5,2,5\n"},
    {"numbers cut by decimal commas", "0,05,0,25\n"},
    {"a number that is missing", "0.5,,0.25\n"},
    {"two columns for taps", "0.5,1\n0.25,1\n"},
    {"two columns of one name", "h,h\n1,2\n"},
    {"large whole numbers", "16384\n8192\n"},
    {"only zeros", "0\n0\n"},
    {"most of the energy late", "0.01\n0.02\n0.1\n0.5\n"},
    {"a number that is too large", "2e9\n0.5\n"},
};

class Chapter {
public:
    explicit Chapter(Page& page) : page_(page) {}

    void taps(std::string_view done, const std::string& path, const std::string& bytes, const std::string& words = "",
              const std::string& design = "1\n") {
        stage(done, path, bytes, "kind = \"fir\"\ntaps_file = \"" + path + "\"\n" + words, design);
    }
    void sections(std::string_view done, const std::string& path, const std::string& bytes,
                  const std::string& words = "", const std::string& design = "1 0 0 0 0\n") {
        stage(done, path, bytes, "kind = \"biquad-cascade\"\nsections_file = \"" + path + "\"\n" + words, design);
    }
    void stage(std::string_view done, const std::string& path, const std::string& bytes, const std::string& filter,
               const std::string& design) {
        FakeFiles files;
        files.contents["./" + path] = bytes;
        files.contents["./design.txt"] = design;
        Parts parts;
        parts.filter = filter;
        show_plan(page_, done, parts.text(), files);
    }

private:
    Page& page_;
};

std::string npy(const std::string& type, const std::string& shape, const std::string& data) {
    std::string dictionary = "{'descr': '" + type + "', 'fortran_order': False, 'shape': " + shape + ", }";
    dictionary.resize(117, ' ');
    return "\x93NUMPY\x01" + std::string(1, '\0') + std::string("\x76\0", 2) + dictionary + "\n" + data;
}

void show_words(Chapter& chapter) {
    const std::string q15 = "file_fraction_bits = 15\n", two = "int16_t low[] = {1}, high[] = {2};\n";
    chapter.taps("an array that is not there", "h.h", two, "file_array = \"mid\"\n" + q15);
    chapter.taps("an array that is not there beside another", "h.h", "int16_t h[] = {1};\n",
                 "file_array = \"g\"\n" + q15);
    chapter.taps("rows of taps", "h.h", "int16_t h[2][2] = {{1, 2}, {3, 4}};\n", q15);
    chapter.taps("an array of a file without any", "h.h", "int h;\n", "file_array = \"h\"\n");
    chapter.taps("an array that is there twice", "h.h",
                 "#if WIDE\nint32_t h[] = {1};\n#else\nint16_t h[] = {1};\n#endif\n", "file_array = \"h\"\n");
    chapter.taps("a column that is not there", "h.csv", "n,h\n0,1\n", "file_array = \"g\"\n");
    chapter.taps("a column of a file without names", "h.csv", "0,1\n", "file_array = \"g\"\n");
    chapter.taps("an array of an NPY", "h.npy", npy("<f4", "(1,)", std::string("\0\0\x80\x3F", 4)),
                 "file_array = \"h\"\n");
    chapter.taps("a width that the type denies", "h.h", "int16_t h[] = {1};\n", "file_word_bits = 32\n");
    chapter.taps("a width for a text", "h.txt", "1\n", "file_word_bits = 32\n");
    chapter.taps("integers of which nobody says what they are worth", "h.h", "int16_t h[] = {16384};\n");
    chapter.taps("bits and a scale", "h.txt", "1\n", q15 + "file_scale = 0.5\n");
    chapter.taps("fraction bits of fractions", "h.txt", "0.5\n", q15);
    chapter.taps("a scale that leaves nothing", "h.txt", "0.5\n",
                 "file_scale = 1e-6\ncoefficient_fraction_bits = 15\n");
    chapter.taps("a scale beyond all coefficients", "h.txt", "2\n", "file_scale = 1e9\n");
    chapter.taps("taps that fill the output at once", "h.h", "int16_t h[] = {16384};\n", "file_fraction_bits = 0\n");
    chapter.taps("taps that give nothing", "h.txt", "0.5\n", "file_scale = 1e-5\n");
    chapter.taps("other fraction bits in the plan", "h.h", "int16_t h[] = {16384};\n",
                 q15 + "coefficient_fraction_bits = 14\n");
    chapter.taps("other fraction bits in the arithmetic", "h.h", "int16_t h[] = {16384};\n",
                 q15 + "[filter.arithmetic]\ncoefficient_fraction_bits = 14\n");
    chapter.taps("padding that is none", "h.txt", "1\n0.5\n", "file_padding_after = 1\n");
    chapter.taps("nothing but padding", "h.txt", "0\n0\n", "file_padding_before = 2\n");
    chapter.taps("another count", "h.txt", "1\n0.5\n", "file_count = 3\n");
    chapter.stage("a word without a file", "h.txt", "1\n", "kind = \"fir\"\ntaps = [1.0]\nfile_count = 1\n", "");
    chapter.taps("a file that is not there", "h.txt", "1\n", "file_design = \"none.txt\"\n");
    chapter.taps("a design of another length", "h.txt", "1\n0.5\n", "file_design = \"design.txt\"\n");
    chapter.taps("a design in reverse", "h.txt", "1\n0.5\n", "file_design = \"design.txt\"\n", "0.5\n1\n");
    chapter.taps("a design of half the size", "h.h", "int16_t h[] = {16384, 8192};\n",
                 "file_fraction_bits = 14\nfile_design = \"design.txt\"\n", "0.5\n0.25\n");
    chapter.taps("a scale of half the design", "h.txt", "1\n0.5\n", "file_scale = 0.5\nfile_design = \"design.txt\"\n",
                 "1\n0.5\n");
    chapter.taps("a design of other taps", "h.txt", "1\n0.5\n", "file_design = \"design.txt\"\n", "1\n0.25\n");
    chapter.sections("a design negated", "h.txt", "1 0 0 0.5 0.25\n", "file_design = \"design.txt\"\n",
                     "1 0 0 -0.5 -0.25\n");
}

void show_sections(Chapter& chapter) {
    chapter.sections("a layout that is none", "h.txt", "1 0 0 0 0\n", "file_layout = \"b0 b1 c2\"\n");
    chapter.sections("a layout beside other names", "h.csv", "b0,a1\n1,0.5\n", "file_layout = \"b0 b1\"\n");
    chapter.sections("a layout of another length than the rows", "h.csv", "1,0,0,0\n1,0,0,0\n");
    chapter.sections("a layout of the plan of another length than the rows", "h.csv", "1,0,0,0\n1,0,0,0\n",
                     "file_layout = \"b0 b1\"\n");
    chapter.sections("six numbers in a column", "h.txt", "1\n0\n0\n1\n0\n0\n");
    chapter.sections("four numbers in a column", "h.txt", "1\n0\n0\n0\n");
    chapter.sections("a 0 that is none", "h.txt", "1 7 0 0 0 0\n", "file_layout = \"b0 0 b1 b2 a1 a2\"\n");
    chapter.sections("an a0 that is not 1", "h.txt", "3 0 0 2 0 0\n3 0 0 2 0 0\n");
    chapter.sections("an a0 behind a first 1", "h.txt", "1 0 0 2 0 0\n1 0 0 2 0 0\n");
    chapter.sections("a section that fills up an array", "h.txt", "1 0 0 0 0\n0 0 0 0 0\n");
    chapter.sections("negated feedback", "h.txt", "1 0 0 1.5 -0.7\n");
    chapter.sections("the denominator first", "h.txt", "-1.5 0.7 0.1 2.5 1.25\n");
    chapter.sections("the denominator first, negated", "h.txt", "1.5 -0.7 0.1 2.5 1.25\n");
    chapter.sections("an unstable section", "h.txt", "1 0 0 -2.5 1.7\n");
}

}  // namespace

void coefficient_file_chapter(Page& page) {
    page.chapter("Files of coefficients");
    Chapter chapter(page);
    for (const Source& source : c_sources)
        chapter.taps(source.done, "h.h", std::string(source.text), "file_fraction_bits = 15\n");
    std::string many = "int8_t h[] = {", deep, words = "int8_t h[] = {1};";
    for (int i = 0; i <= 262144; ++i) many += "1,";
    for (int i = 0; i < 65; ++i) deep += "#if X\n";
    words += "\n" + std::string(1'000'001, ';');
    chapter.taps("too many numbers", "h.h", many + "};\n");
    chapter.taps("too many #if", "h.h", deep);
    chapter.taps("too many words", "h.h", words);
    for (const Source& source : texts) chapter.taps(source.done, "h.txt", std::string(source.text));
    chapter.taps("no NPY", "h.npy", "0.5\n");
    chapter.taps("an NPY that is cut", "h.npy", npy("<f4", "(2,)", std::string(4, '\0')));
    chapter.taps("an empty NPY", "h.npy", npy("<f4", "(0,)", ""));
    chapter.taps("an NPY with an infinite number", "h.npy", npy("<f4", "(1,)", std::string("\0\0\x80\x7F", 4)));
    chapter.taps("an NPY beyond 53 bits", "h.npy", npy("<i8", "(1,)", std::string("\1\0\0\0\0\0\x20\0", 8)));
    chapter.taps("an NPY of too many numbers", "h.npy", npy("|i1", "(262145,)", std::string(262145, '\1')));
    show_words(chapter);
    show_sections(chapter);
}

}  // namespace halflsb::diagnostics
