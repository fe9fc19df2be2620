// From the numbers of a file and the words of a plan to the coefficients of a stage.
#include <cmath>
#include <fstream>
#include <iterator>

#include "oracle/filters/filter.hpp"
#include "tests/oracle/filters/coefficient_reading.hpp"
#include "tests/support/source_dir.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

std::string file_of(const std::string& path) {
    std::ifstream file(test::source_path(path), std::ios::binary);
    REQUIRE(file);
    return {std::istreambuf_iterator<char>(file), std::istreambuf_iterator<char>()};
}

/// As stored by a firmware: half away from zero.
Numbers rounded(Numbers numbers, int bits) {
    for (double& number : numbers) number = std::round(number * std::ldexp(1.0, bits)) / std::ldexp(1.0, bits);
    return numbers;
}

}  // namespace

TEST_CASE("coefficient file: the tables of the board's firmware are its designs, rounded", "[oracle]") {
    const auto design = [](const std::string& name) {
        return coefficients_of(name + ".txt", file_of("rigs/filters/coefficients/" + name + ".txt"), taps()).numbers;
    };
    for (const std::string name : {"smoothing", "quick-smoothing"}) {
        const auto made =
            coefficients_of(name + ".h", file_of("rigs/filters/coefficients/" + name + ".h"), with_bits(taps(), 15));
        CHECK(made.numbers == rounded(design(name), 15));
        CHECK(made.fraction_bits == 15);
    }
    FileWords words = with_bits(sections(), 14);
    words.feedback = "added";
    const std::string notch = file_of("rigs/filters/coefficients/mains-notch.h");
    CHECK(coefficients_of("mains-notch.h", notch, words).numbers == rounded(design("mains-notch"), 14));
    const std::string settle = file_of("rigs/filters/coefficients/settle.h");
    words.array = "settle_q15";
    CHECK(coefficients_of("settle.h", settle, words).numbers == rounded(design("settle"), 14));
    words.array = "settle_q31";
    words.fraction_bits = 30;
    const Numbers fine = coefficients_of("settle.h", settle, words).numbers;
    words.array = "settle_f32";
    words.fraction_bits.reset();
    const auto floats = coefficients_of("settle.h", settle, words);
    CHECK(!floats.fraction_bits);
    const Numbers exact = design("settle");
    REQUIRE(fine.size() == exact.size());
    for (std::size_t i = 0; i < exact.size(); ++i) {
        // The text has 12 digits, of numbers below 2: half a unit of the twelfth, and half an LSB or half an ulp.
        CHECK(std::fabs(fine[i] - exact[i]) <= 5e-12 + 0x1p-31);
        CHECK(std::fabs(floats.numbers[i] - exact[i]) <= 5e-12 + 0x1p-24);
    }
    // As declared without its sign it cannot be, and the message says what it looks like.
    words = with_bits(sections(), 14);
    CHECK(refusal("mains-notch.h", notch, words) ==
          "plan file_feedback: sections_file: section 1 is unstable: a1 = 1.882568359375, a2 = -0.948974609375 put a "
          "pole "
          "at radius 2.2959024 / the file looks negated: all is stable with file_feedback = \"added\"");
}

TEST_CASE("coefficient file: what a number is worth is said once", "[oracle]") {
    const auto made = coefficients_of("t.txt", "16384\n-8192\n", with_bits(taps(), 15));
    CHECK(made.numbers == Numbers{0.5, -0.25});
    CHECK(made.fraction_bits == 15);
    FileWords scaled = taps();
    scaled.scale = 0.001;
    CHECK(coefficients_of("t.txt", "500\n250\n", scaled).numbers == Numbers{500 * 0.001, 250 * 0.001});
    CHECK(!coefficients_of("t.txt", "500\n250\n", scaled).fraction_bits);
    CHECK(!coefficients_of("t.txt", "16384.5\n2\n", with_bits(taps(), 15)).fraction_bits);
    scaled.fraction_bits = 3;
    CHECK(refusal("t.txt", "1\n", scaled) ==
          "plan file_scale: file_fraction_bits and file_scale are both given / keep one of them");
    // Whole numbers as they are, up to 127; an array of integers never without a word.
    CHECK(coefficients_of("t.txt", "127\n1\n", taps()).numbers == Numbers{127, 1});
    CHECK(
        refusal("t.txt", "128\n1\n", taps()) ==
        "plan taps_file: taps_file: the file holds whole numbers up to 128, and what they are worth is not said / add "
        "file_fraction_bits: 15 where 32768 would be 1, 14 where 16384 would be, 0 where 1 is 1");
    CHECK(refusal("t.txt", "128.5\n1\n", taps()) == "accepted");
    CHECK(refusal("t.h", "float h[] = {1, 0};", taps()) == "accepted");
    CHECK(refusal("t.h", "int16_t h[] = {1, 0};", taps()).find("integers of int16_t, and what they") !=
          std::string::npos);
    CHECK(coefficients_of("t.h", "int16_t h[] = {1, 0};", with_bits(taps(), 0)).fraction_bits == 0);
    CHECK(refusal("t.txt", "0.5\n0.99\n", with_bits(taps(), 15)) ==
          "plan file_fraction_bits: file_fraction_bits = 15, but the largest number in the file is 0.99: every "
          "coefficient would be below one LSB / the numbers are no integers of a word: leave file_fraction_bits out");
    CHECK(refusal("t.txt", "0.5\n1\n", with_bits(taps(), 15)) == "accepted");
    FileWords tiny = taps();
    tiny.scale = 0x1p-17;
    CHECK(refusal("t.txt", "1\n0\n", tiny, 15) ==
          "plan file_scale: file_scale = 7.62939453125e-06 makes the largest coefficient 7.62939453125e-06, below half "
          "an "
          "LSB of coefficient_fraction_bits = 15 / correct the scale: all coefficients would be stored as 0");
    CHECK(refusal("t.txt", "1\n0\n", tiny, 16) == "accepted");
    tiny.scale = 1e9;
    CHECK(refusal("t.txt", "2\n1\n", tiny) ==
          "at 2\n1\n: 2 is no coefficient: with its scale it is 2000000000 / give numbers from -1000000000 to "
          "1000000000");
    CHECK(refusal("t.txt", "0\n0\n", taps()) == "at 0\n0\n: all numbers are 0 / is it the array that was meant?");
}

TEST_CASE("coefficient file: padding is checked and left out, the rest is counted", "[oracle]") {
    FileWords words = taps();
    words.padding_after = 1;
    words.count = 3;
    CHECK(coefficients_of("t.txt", "0.25\n0.5\n0.25\n0\n", words).numbers == Numbers{0.25, 0.5, 0.25});
    words.count = 4;
    CHECK(refusal("t.txt", "0.25\n0.5\n0.25\n0\n", words) ==
          "plan file_count: file_count = 4, and the file holds 3 taps / correct the one that is wrong; zeros that are "
          "none "
          "of them are file_padding_before or file_padding_after");
    words.count.reset();
    CHECK(refusal("t.txt", "0.25\n0.5\n", words) ==
          "at 0.5\n: 0.5 stands where the plan says that there is padding / padding is 0: correct the file, or "
          "file_padding_before and file_padding_after");
    words.padding_before = 2;
    CHECK(coefficients_of("t.txt", "0\n0\n1\n0\n", words).numbers == Numbers{1});
    CHECK(refusal("t.txt", "0\n0\n1\n", words) ==
          "plan file_padding_after: file_padding_after: of 3 numbers in the file 3 would be padding / give fewer than "
          "there are");
    FileWords two = sections();
    two.count = 2;
    CHECK(refusal("t.txt", "1 0 0 0 0\n", two)
              .starts_with("plan file_count: file_count = 2, and the file holds 1 section / "));
    two.padding_after = 5;
    two.count = 1;
    CHECK(coefficients_of("t.txt", "1 0 0 -0.5 0\n0 0 0 0 0\n", two).numbers == Numbers{1, 0, 0, -0.5, 0});
    CHECK(
        refusal("t.txt", "1 0 0 -0.5 0\n0 0 0 0 0\n", sections()) ==
        "at 0 0 0 : section 2 passes nothing: b0, b1 and b2 are 0 / zeros that fill up an array are no section: say so "
        "with file_padding_after");
}

TEST_CASE("coefficient file: taps that look reversed need a word, and any word settles it", "[oracle]") {
    // The energy's centre may lie behind the middle by a tenth of the length and half a tap.
    const std::string late = "0.01\n0.05\n0.2\n0.5\n0.25\n";
    FileWords words = taps();
    CHECK(refusal("t.txt", late, words) ==
          "plan taps_file: taps_file: the taps look reversed, most of what they pass comes late / write file_order = "
          "\"oldest-first\" if the file begins with the oldest, or \"newest-first\" if they are meant to be so");
    words.order = "oldest-first";
    CHECK(coefficients_of("t.txt", late, words).numbers == Numbers{0.25, 0.5, 0.2, 0.05, 0.01});
    words.order = "newest-first";
    CHECK(coefficients_of("t.txt", late, words).numbers == Numbers{0.01, 0.05, 0.2, 0.5, 0.25});
    words.order.reset();
    for (const char* text : {"0.25\n0.5\n0.2\n0.05\n0.01\n", "0.25\n0.5\n0.25\n", "-0.5\n0\n0.5\n",
                             "0\n0.25\n0.5\n0.25\n", "0.5\n0.6\n", "1\n"}) {
        INFO(text);
        CHECK(refusal("t.txt", text, words) == "accepted");
    }
    // Nine taps, one of them 1: the centre of index 5 is inside the allowance of 0.8 + 0.5 behind 4, that of 6 is not.
    const auto delay = [](std::size_t k) {
        std::string text;
        for (std::size_t i = 0; i < 9; ++i) text += i == k ? "1\n" : "0\n";
        return text;
    };
    CHECK(refusal("t.txt", delay(5), words) == "accepted");
    CHECK(refusal("t.txt", delay(6), words).find("look reversed") != std::string::npos);
}

TEST_CASE("coefficient file: sections stand in any layout", "[oracle]") {
    const Numbers wanted = {1, 0.5, 0.25, -0.5, 0.125};
    FileWords words = sections();
    CHECK(coefficients_of("t.txt", "1\n0.5\n0.25\n-0.5\n0.125\n", words).numbers == wanted);
    CHECK(coefficients_of("t.csv", "1,0.5,0.25,-0.5,0.125\n", words).numbers == wanted);
    CHECK(coefficients_of("t.csv", "1,0.5,0.25,1,-0.5,0.125\n1,0,0,1,0,0\n", words).numbers.size() == 10);
    CHECK(coefficients_of("t.csv", "a1,a2,b0,b1,b2\n-0.5,0.125,1,0.5,0.25\n", words).numbers == wanted);
    words.layout = "b0 0 b1 b2 a1 a2 -";
    CHECK(coefficients_of("t.csv", "1,0,0.5,0.25,-0.5,0.125,3", words).numbers == wanted);
    CHECK(refusal("t.csv", "1,7,0.5,0.25,-0.5,0.125,3", words) ==
          "at 7,0.5,: section 1 has 7 where the layout has 0 / correct file_layout; write - for a number that does not "
          "count");
    CHECK(refusal("t.csv", "1,0,0.5,0.25\n1,1,1,1\n", words) ==
          "at 1,1,1,: a row has 4 numbers, and file_layout has 7 / say in the plan what stands in a row, for example "
          "file_layout = \"b0 0 b1 b2 a1 a2\"");
    words.layout = "b0  b1 a1";  // a section of the first order
    CHECK(coefficients_of("t.csv", "1,0.5,-0.5\n0.25,0,0.125\n", words).numbers ==
          Numbers{1, 0.5, 0, -0.5, 0, 0.25, 0, 0, 0.125, 0});
    words.feedback = "added";
    CHECK(coefficients_of("t.csv", "1,0.5,0.5\n", words).numbers == Numbers{1, 0.5, 0, -0.5, 0});
    for (const char* wrong : {"b0 b1 b1", "b1 b2", "b0 c1", "0 -", "B0"}) {
        words.layout = wrong;
        CHECK(refusal("t.csv", "1,0.5,0.5\n", words) ==
              "plan file_layout: file_layout = \"" + std::string(wrong) +
                  "\" is no order of coefficients / name each of b0 b1 b2 a0 a1 a2 at most once, b0 at least; 0 for a "
                  "number that must be 0, - for one that does not count");
    }
    words.layout = "b0 b1 b2 a1 a2";
    CHECK(
        refusal("t.csv", "a1,a2,b0,b1,b2\n0,0,1,0,0\n", words) ==
        "plan file_layout: file_layout = \"b0 b1 b2 a1 a2\", and the file calls its columns \"a1 a2 b0 b1 b2\" / leave "
        "file_layout out, or correct the file");
    words = sections();
    CHECK(refusal("t.txt", "1\n0\n0\n1\n0\n0\n", words).find("say which: file_layout = \"b0 0 b1 b2 a1 a2\"") !=
          std::string::npos);
    CHECK(refusal("t.txt", "1\n2\n0\n1\n0\n0\n", words) ==
          "plan sections_file: sections_file: 6 numbers are no whole number of sections / a section has 5 numbers, b0 "
          "b1 b2 "
          "a1 a2; where it has 6, say which: file_layout = \"b0 b1 b2 a0 a1 a2\"");
    CHECK(
        refusal("t.txt", "1\n0\n0\n1\n", words) ==
        "plan sections_file: sections_file: 4 numbers are no whole number of sections / a section has 5 numbers here; "
        "file_layout says which, file_padding_after what is none of them");
    CHECK(refusal("t.csv", "1,0,0,2,0,0\n1,0,0,1,0,0\n", words)
              .find("section 1 has a0 = 2 / a0 must be 1; the first number is: is the order file_layout = \"a0 a1 a2 "
                    "b0 b1 b2\"?") != std::string::npos);
    CHECK(refusal("t.csv", "3,0,0,2,0,0\n1,0,0,1,0,0\n", words).find("a0 must be 1: divide the numbers") !=
          std::string::npos);
    // a0 of a fixed-point table is 1 after its scale.
    words = with_bits(sections(), 14);
    CHECK(coefficients_of("t.h", "struct s h[1] = {{16384, 0, 0, 16384, -8192, 0}};", words).numbers ==
          Numbers{1, 0, 0, -0.5, 0});
}

TEST_CASE("coefficient file: an unstable section is told with what would make it stable", "[oracle]") {
    FileWords words = sections();
    CHECK(refusal("t.txt", "1 0 0 1.5 -0.7\n", words)
              .find("the file looks negated: all is stable with file_feedback = "
                    "\"added\"") != std::string::npos);
    words.feedback = "added";
    CHECK(refusal("t.txt", "1 0 0 -1.5 0.7\n", words).find("all is stable with file_feedback = \"subtracted\"") !=
          std::string::npos);
    words.feedback.reset();
    CHECK(refusal("t.txt", "-1.5 0.7 0.1 2.5 1.25\n", words) ==
          "plan file_layout: sections_file: section 1 is unstable: a1 = 2.5, a2 = 1.25 put a pole at radius 1.80901699 "
          "/ the "
          "file looks ordered in another way: all is stable with file_layout = \"a1 a2 b0 b1 b2\"");
    CHECK(refusal("t.txt", "1.5 -0.7 0.1 2.5 1.25\n", words)
              .find("all is stable with file_layout = \"a1 a2 b0 b1 b2\" and "
                    "file_feedback = \"added\"") != std::string::npos);
    CHECK(refusal("t.csv", "0.5,0,1,-1.9,1.2,0.9\n0.5,0,1,-1.9,1.2,0.9\n", words).find("a0 must be 1") !=
          std::string::npos);
    words.layout = "b0 b1 b2 a1 a2 -";
    CHECK(refusal("t.csv", "0.5,3,0.1,2.5,1.2,0.5\n", words)
              .find("all is stable with file_layout = \"b0 0 b1 b2 a1 a2\"") == std::string::npos);
    CHECK(refusal("t.csv", "0.5,0,0.1,2.5,-1.2,0.5\n", words)
              .find("all is stable with file_layout = \"b0 0 b1 b2 a1 a2\"") != std::string::npos);
    words.layout.reset();
    CHECK(refusal("t.txt", "1 0 0 -0.5 0.25\n1 0 0 -2.5 1.7\n", words) ==
          "at -2.5 1: section 2 is unstable: a1 = -2.5, a2 = 1.7 put a pole at radius 1.30384048 / poles must lie "
          "inside the "
          "unit circle; is the scale right, and the order of the numbers?");
    // One section that would stay unstable takes the hint away.
    CHECK(refusal("t.txt", "1 0 0 1.5 -0.7\n1 0 0 -1.5 0.7\n", words).starts_with("at 1.5 -0"));
}

TEST_CASE("coefficient file: beside its design it is seen what is reversed, negated, scaled or changed", "[oracle]") {
    const auto told = [](const FileWords& words, const std::string& text, const Numbers& design) {
        const auto problem = differs_from_design(coefficients_of("t.txt", text, words), words, design);
        if (!problem) return std::string("the same");
        const std::string place = problem->byte ? "at " + text.substr(*problem->byte, 5) : "plan " + problem->word;
        return place + ": " + problem->problem + " / " + problem->remedy;
    };
    FileWords words = with_bits(taps(), 4);
    CHECK(told(words, "8\n4\n2\n", {0.5, 0.25, 0.125}) == "the same");
    // One LSB is 0.0625: a design that far away was rounded in another direction, and no more.
    CHECK(told(words, "8\n4\n2\n", {0.5, 0.3125, 0.125}) == "the same");
    CHECK(
        told(words, "8\n4\n2\n", {0.5, 0.3126, 0.125}) ==
        "at 4\n2\n: taps[1] is 0.25, in the design 0.3126; they may differ by 0.0625 / correct the one that is wrong");
    CHECK(told(words, "8\n4\n0\n", {0, 0.25, 0.5}) ==
          "plan file_order: taps_file: the taps are those of file_design in reverse / write file_order = "
          "\"oldest-first\"");
    CHECK(told(words, "8\n4\n", {0.5, 0.25, 0.125}) ==
          "plan file_design: file_design has 3 taps, the file 2 taps / compare a file with its own design");
    words.fraction_bits = 14;
    CHECK(told(words, "16384\n8192\n", {0.5, 0.25}) ==
          "plan file_fraction_bits: the coefficients are 2 times those of file_design / write "
          "file_fraction_bits = 15");
    FileWords two = sections();
    CHECK(told(two, "1 0 0 0.5 -0.25\n", {1, 0, 0, -0.5, 0.25}) ==
          "plan file_feedback: sections_file: a1 and a2 are those of file_design negated / write file_feedback = "
          "\"added\"");
    CHECK(told(two, "1 0 0 -0.5 0.25\n", {1, 0, 0, -0.5, 0.2500009}) == "the same");
    CHECK(told(two, "1 0 0 -0.5 0.25\n", {1, 0, 0, -0.5, 0.250001}).starts_with("at 0.25\n: a2 of section 1 is 0.25"));
}

TEST_CASE("coefficient file: each kind with a file has the words, and no other", "[oracle]") {
    for (const Recipe& recipe : filter_recipes()) {
        INFO(recipe.name);
        const bool has_taps = find_parameter(recipe, taps_file_word) != nullptr;
        const bool has_sections = find_parameter(recipe, sections_file_word) != nullptr;
        CHECK((find_parameter(recipe, "file_order") != nullptr) == has_taps);
        CHECK((find_parameter(recipe, "file_layout") != nullptr) == has_sections);
        CHECK((find_parameter(recipe, "file_array") != nullptr) == (has_taps || has_sections));
    }
    CHECK(coefficient_file_kind("a/b.h", "") == CoefficientFileKind::c_source);
    CHECK(coefficient_file_kind("b.inc", "") == CoefficientFileKind::c_source);
    CHECK(coefficient_file_kind("h", "") == CoefficientFileKind::text);
    CHECK(coefficient_file_kind("b.npy", "") == CoefficientFileKind::npy);
    CHECK(coefficient_file_kind("b.h", "\x93NUMPY") == CoefficientFileKind::npy);
}
