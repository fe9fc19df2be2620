// Random tables of coefficients in C, against what the C compiler of this machine makes of the same text. It shares
// nothing with our reader: a program prints the arrays that it compiled.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <fstream>
#include <map>
#include <random>
#include <sstream>

#include "oracle/filters/c_array.hpp"
#include "tests/support/temporary_folder.hpp"

using namespace halflsb;

namespace {

constexpr std::uint32_t seed = 20261202;
constexpr int files = 8, arrays_a_file = 60;

struct Type {
    const char* name;
    int bits;  ///< 0: float or double
    bool is_signed;
};

const std::vector<Type> types = {{"int8_t", 8, true},       {"uint8_t", 8, false}, {"int16_t", 16, true},
                                 {"uint16_t", 16, false},   {"int32_t", 32, true}, {"uint32_t", 32, false},
                                 {"int64_t", 64, true},     {"short", 16, true},   {"unsigned char", 8, false},
                                 {"coefficient", 16, true}, {"q15_t", 16, true},   {"WORD", 32, true},
                                 {"float", 0, true},        {"double", 0, true},   {"const float", 0, true}};

/// Arrays that a compiler takes, in every spelling that ours reads.
class Writer {
public:
    explicit Writer(std::uint32_t s) : random_(s) {}

    std::size_t below(std::size_t n) { return static_cast<std::size_t>(random_()) % n; }

    std::string header(std::vector<std::string>& names) {
        std::string text =
            "#ifndef TABLES_H\n#define TABLES_H\n#include <stdint.h>\ntypedef int16_t coefficient;\ntypedef short "
            "q15_t;\n"
            "#define WORD int32_t\n#define SIX 6\n#define EIGHT (SIX + 2)\n#define UNIT 0x40\n#define HALF -(UNIT / "
            "2)\n"
            "#if 0\nint16_t dead[] = {1};\n#else\nextern const int16_t declared[4];\n#endif\n";
        for (int i = 0; i < arrays_a_file; ++i) {
            names.push_back("table_" + std::to_string(i));
            text += array(names.back());
        }
        return text + "#endif\n";
    }

private:
    std::string blank() {
        static const std::vector<std::string> blanks = {
            "", " ", "\n", "\t", " /* {1}, */ ", " // ;{\n", " \\\n", "\r\n", "\n#if 0\n, 99,\n#endif\n"};
        return blanks[below(10) < 6 ? below(2) : below(blanks.size())];
    }

    std::string array(const std::string& name) {
        const Type& type = types[below(types.size())];
        const std::size_t count = 1 + below(6);
        std::string text = below(2) == 0 ? "static const " : "const ";
        if (std::string(type.name).starts_with("const")) text = "static ";
        text += std::string(type.name) + " " + name;
        if (below(4) == 0) {
            const std::size_t rows = 1 + below(3);
            text += "[" + (below(2) == 0 ? std::string() : std::to_string(rows + below(3))) + "][SIX] = {";
            for (std::size_t r = 0; r < rows; ++r) text += (r > 0 ? ", {" : "{") + list(type, count) + "}";
            return text + "};\n";
        }
        static const std::vector<std::string> sizes = {"", "6", "EIGHT", "2 * SIX", "0x10", "010", "1 << 3", "SIX + 1"};
        text += "[" + sizes[below(sizes.size())] + "]";
        if (below(5) == 0) text += " __attribute__((aligned(4)))";
        return text + " =" + blank() + "{" + list(type, count) + (below(4) == 0 ? "," : "") + blank() + "};\n";
    }

    std::string list(const Type& type, std::size_t count) {
        std::string text;
        for (std::size_t i = 0; i < count; ++i) text += (i > 0 ? "," : "") + blank() + element(type) + blank();
        return text;
    }

    std::string element(const Type& type) {
        std::string text = type.bits == 0 ? real() : integer(type);
        switch (below(8)) {
            case 0:
                return "(" + text + ")";
            case 1:
                return "(" + std::string(type.name) + ")" +
                       (text.front() == '-' || below(2) == 0 ? "(" + text + ")" : text);
            case 2:
                return "+" + text;
            default:
                return text;
        }
    }

    std::uint64_t bits(int count) {
        const std::uint64_t word = (static_cast<std::uint64_t>(random_()) << 32) | random_();
        // Small ones, and those at the ends of the word, more often than chance would have them.
        const auto kept = static_cast<int>(1 + below(static_cast<std::size_t>(count)));
        const std::uint64_t top = count == 64 ? ~std::uint64_t{0} : (std::uint64_t{1} << count) - 1;
        if (below(6) == 0) return top - below(3);
        return kept == 64 ? word : word & ((std::uint64_t{1} << kept) - 1);
    }

    static std::string in_base(std::uint64_t number, const char* format) {
        char text[40];
        std::snprintf(text, sizeof text, format, static_cast<unsigned long long>(number));
        return text;
    }

    std::string integer(const Type& type) {
        const int width = std::min(type.bits, 52);
        switch (below(9)) {
            case 0:  // the pattern of the word, which may be a negative number
                return in_base(bits(width), below(2) == 0 ? "0x%llX" : "0x%llx");
            case 1:
                return "0" + in_base(bits(width), "%llo");
            case 2:
                return in_base(bits(width - (type.is_signed ? 1 : 0)), "%llu") + (below(2) == 0 ? "u" : "UL");
            case 3:
                return "UNIT";
            case 4:
                return type.is_signed ? "HALF" : "UNIT";
            case 5:
                return type.is_signed ? "-" + in_base(bits(width - 1) / 2, "0x%llX") : "SIX";
            case 6:
                return "(1 << " + std::to_string(below(7)) + ") - 3 * 5 % 4 + 7 / 2";
            case 7:
                if (type.is_signed && type.bits < 64)
                    return "-" + std::to_string((std::uint64_t{1} << (type.bits - 1)) - below(2));
                [[fallthrough]];
            default:
                return (type.is_signed && below(2) == 0 ? "-" : "") +
                       in_base(bits(width - (type.is_signed ? 1 : 0)), "%llu");
        }
    }

    std::string real() {
        const double number = std::ldexp(static_cast<double>(random_()) - 2147483648.0, -static_cast<int>(below(60)));
        const std::string sign = below(2) == 0 ? "-" : "";
        char text[64];
        static const std::vector<const char*> formats = {"%.17g", "%.9g", "%.3f", "%.4e", "%a", "%.0f."};
        const char* format = formats[below(formats.size())];
        std::snprintf(text, sizeof text, format, std::fabs(number));
        std::string digits = text;
        if (digits.find_first_of(".ep") == std::string::npos) return sign + digits;  // an integer in a float array
        static const std::vector<std::string> suffixes = {"", "f", "F"};
        return sign + digits + suffixes[below(3)];
    }

    std::mt19937 random_;
};

std::string command_output(const std::string& command) {
    std::string text;
    std::FILE* pipe = popen(command.c_str(), "r");
    REQUIRE(pipe != nullptr);
    char part[4096];
    while (const std::size_t got = std::fread(part, 1, sizeof part, pipe)) text.append(part, got);
    INFO(command << "\n" << text);
    REQUIRE(pclose(pipe) == 0);
    return text;
}

/// What the compiler stored, by the name of the array.
std::map<std::string, std::vector<double>> compiled(const std::string& header, const std::vector<std::string>& names) {
    TemporaryFolder folder;
    const std::string base = folder.path() + "/tables";
    std::ofstream(base + ".h", std::ios::binary) << header;
    std::string program =
        "#include <stdio.h>\n#include \"tables.h\"\n"
        "#define SHOW(x, T) { const T* p = (const T*)(const void*)(x); "
        "for (unsigned long i = 0; i < sizeof(x) / sizeof(T); i++) printf(\" %a\", (double)p[i]); }\n"
        "int main(void) {\n";
    for (const std::string& name : names) {
        // The element's type is in the text, between the qualifiers and the name.
        const std::size_t at = header.find(" " + name + "[");
        const std::size_t line = header.rfind('\n', at) + 1;
        program += "printf(\"" + name + "\"); SHOW(" + name + ", " +
                   header.substr(line, at - line).substr(header.compare(line, 6, "static") == 0 ? 7 : 0) +
                   ") printf(\"\\n\");\n";
    }
    program += "return 0;\n}\n";
    std::ofstream(base + ".c") << program;
    command_output("cc -std=gnu11 -w -o '" + base + "' '" + base + ".c' 2>&1");
    std::istringstream lines(command_output("'" + base + "'"));
    std::map<std::string, std::vector<double>> found;
    for (std::string line; std::getline(lines, line);) {
        std::istringstream words(line);
        std::string name, word;
        words >> name;
        while (words >> word) found[name].push_back(std::strtod(word.c_str(), nullptr));
    }
    return found;
}

}  // namespace

TEST_CASE("c array: random tables hold what the compiler stores", "[oracle]") {
    Writer writer(seed);
    int taken = 0, refused = 0;
    std::map<std::string, int> reasons;
    for (int file = 0; file < files; ++file) {
        std::vector<std::string> names;
        const std::string header = writer.header(names);
        const auto truth = compiled(header, names);
        REQUIRE(truth.size() == names.size());
        for (const std::string& name : names) {
            const auto read = read_c_array(header, {name, {}, false});
            const std::size_t at = header.find(" " + name + "[");
            INFO("seed " << seed << ", file " << file << "\n" << header.substr(at, header.find("};", at) - at));
            if (const auto* problem = std::get_if<FileProblem>(&read)) {
                ++refused;
                ++reasons[problem->problem.substr(problem->problem.rfind('"') + 1)];
                continue;
            }
            ++taken;
            REQUIRE(std::get<CoefficientTable>(read).numbers == truth.at(name));
        }
    }
    std::string told;
    for (const auto& [reason, count] : reasons) told += std::to_string(count) + reason + "\n";
    INFO("seed " << seed << ": taken " << taken << ", refused " << refused << "\n" << told);
    // What C does in silence (a decimal that does not fit) is refused; all else is read.
    CHECK(taken > 9 * refused);
    CHECK(taken + refused == files * arrays_a_file);
}
