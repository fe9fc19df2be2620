// Coefficients in text files and in NPY files.
#include "tests/oracle/filters/coefficient_reading.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

const std::string how =
    "write one number a line, or the same count on every line between commas; with a decimal point; # starts a comment";
const std::string point = "write numbers with a decimal point, 0.5";

}  // namespace

TEST_CASE("coefficient file: a text has a number a line, a row, or a column by name", "[oracle]") {
    const Numbers three = {0.5, 0.25, -0.125};
    for (const std::string text :
         {"# taps\n0.5\n\n +0.25 # two\n-1.25e-1\r\n", "0.5, 0.25, -0.125\n", "0.5;0.25;-0.125", "0.5\t0.25\t-0.125",
          "  0.5   0.25 -0.125  ", "h\n0.5\n0.25\n-0.125\n", "0.5,\n0.25,\n-0.125,\n", "0.5, 0.25,\n-0.125\n"}) {
        INFO(text);
        CHECK(coefficients_of("t.csv", text, taps()).numbers == three);
    }
    // A line that ends in a comma goes on; but a table may end so on every line.
    CHECK(coefficients_of("t.csv", "0.5, 0.25,\n-0.125, 0.5,\n0,\n", taps()).numbers ==
          Numbers{0.5, 0.25, -0.125, 0.5, 0});
    CHECK(coefficients_of("t.csv", "0.5, 0.25,\n-0.125, 0\n", taps()).numbers == Numbers{0.5, 0.25, -0.125, 0});
    CHECK(refusal("t.csv", "0.5, 0.25,\n-0.125, 0,\n", taps()).find("the numbers stand in rows of 2") !=
          std::string::npos);
    CHECK(refusal("t.csv", "n,h\n0,0.5,\n1,0.25\n", taps()).find("the numbers stand in rows of 2") !=
          std::string::npos);
    CHECK(coefficients_of("t.txt", "1 0.5 0.25 1 -0.5 0.125\n", sections()).numbers ==
          Numbers{1, 0.5, 0.25, -0.5, 0.125});
    CHECK(coefficients_of("t.txt", "1 0 0 -0.5 0 2 0 0 0.5 0\n", sections()).numbers ==
          Numbers{1, 0, 0, -0.5, 0, 2, 0, 0, 0.5, 0});
    FileWords column = taps();
    column.array = "h";
    CHECK(coefficients_of("t.csv", "n,h,\"g\"\n0,0.5,1\n1,0.25,1\n2,-0.125,1\n", column).numbers == three);
    CHECK(refusal("t.csv", "0.5\n", column) ==
          "plan file_array: file_array = \"h\": the file has no such column / a first line with words would name its "
          "columns");
    CHECK(refusal("t.csv", "n,g\n0,1\n", column) ==
          "plan file_array: file_array = \"h\": the file has no such column / its columns are \"n\", \"g\"");
    CHECK(refusal("t.csv", "n,n\n0,1\n", column) ==
          "at n\n0,1\n: two columns are called \"n\" / give each a name of its own");
    CHECK(refusal("t.csv", "0.5,1\n0.25,1\n", taps()) ==
          "at 0.25,1: the numbers stand in rows of 2, and taps are one list / name the column with file_array, if a "
          "first "
          "line names them; or have the numbers a decimal comma?");
}

TEST_CASE("coefficient file: what is wrong in a text is said at its place", "[oracle]") {
    CHECK(refusal("t.txt", "1\n0.5x\n", taps()) == "at 0.5x\n: \"0.5x\" is not one number / " + how);
    CHECK(refusal("t.txt", "0x10\n", taps()) == "at 0x10\n: \"0x10\" is not one number / " + how);
    CHECK(refusal("t.txt", "nan\n", taps()) == "at nan\n: \"nan\" is no finite number / " + how);
    CHECK(refusal("t.txt", "# none\n", taps()) == "at # none: there is no number in the file / " + how);
    CHECK(refusal("t.txt", "", taps()) == "at : there is no number in the file / " + how);
    CHECK(refusal("t.txt", "0.5,,1\n", taps()) == "at ,1\n: a number is missing / " + how);
    CHECK(refusal("t.txt", "1,2\n1\n", taps()) == "at 1\n: 1 number in this line, 2 in those above / " + how);
    CHECK(refusal("t.txt", "0.5\n0,25\n", taps()) ==
          "at 0,25\n: \"0,25\" is not one number: has it a decimal comma? / " + point);
    CHECK(refusal("t.txt", "0,5;0,25\n", taps()) ==
          "at 0,5;0,: \"0,5\" is not one number: has it a decimal comma? / " + point);
    CHECK(refusal("t.txt", "1,0,05,1,25\n", taps()) ==
          "at 05,1,2: these look like numbers with a decimal comma / " + point);
    CHECK(refusal("t.txt", "-0,5,0,25\n", taps()) ==
          "at -0,5,0: these look like numbers with a decimal comma / " + point);
    CHECK(refusal("t.txt", "1,5,2\n1,5,2,5,3,5\n", sections()) ==
          "at 1,5,2,: 6 numbers in this line, 3 in those above: have they a decimal comma? / " + point);
    CHECK(refusal("t.txt", "2e9\n0.5\n", taps()) ==
          "at 2e9\n0.: 2000000000 is no coefficient / give numbers from -1000000000 to 1000000000");
    FileWords wide = taps();
    wide.word_bits = 16;
    CHECK(refusal("t.txt", "1\n", wide) ==
          "plan file_word_bits: file_word_bits is about a C source, and this file is none / leave it out");
    std::string many;
    for (int i = 0; i < 262144; ++i) many += "1\n";
    CHECK(refusal("t.txt", many, taps()) == "accepted");
    CHECK(refusal("t.txt", many + "1\n", taps()) == "at 1\n: there are more than 262144 numbers / " + how);
}

TEST_CASE("coefficient file: an NPY holds taps or rows of sections", "[oracle]") {
    // Written byte by byte after the format's description, numpy.lib.format.
    const auto npy = [](const std::string& type, const std::string& shape, const std::string& data) {
        std::string dictionary = "{'descr': '" + type + "', 'fortran_order': False, 'shape': " + shape + ", }";
        dictionary.resize(117, ' ');
        return "\x93NUMPY\x01" + std::string(1, '\0') + std::string("\x76\0", 2) + dictionary + "\n" + data;
    };
    const std::string two("\x00\x40\x00\xE0", 4);
    CHECK(coefficients_of("t.npy", npy("<i2", "(2,)", two), with_bits(taps(), 14)).numbers == Numbers{1.0, -0.5});
    CHECK(coefficients_of("t.npy", npy("<i2", "(1, 2)", two), with_bits(taps(), 14)).numbers == Numbers{1.0, -0.5});
    CHECK(coefficients_of("t.npy", npy("<i2", "(2, 1)", two), with_bits(taps(), 14)).numbers == Numbers{1.0, -0.5});
    CHECK(refusal("t.npy", npy("<i2", "(2,)", two), taps()) ==
          "plan taps_file: taps_file: the file holds integers of <i2, and what they are worth is not said / add "
          "file_fraction_bits: 15 where 32768 would be 1, 14 where 16384 would be, 0 where 1 is 1");
    std::string ten(10, '\0');
    ten[0] = 1;
    CHECK(coefficients_of("t.npy", npy("|i1", "(2, 5)", ten.replace(5, 1, "\x02")), with_bits(sections(), 0)).numbers ==
          Numbers{1, 0, 0, 0, 0, 2, 0, 0, 0, 0});
    std::string twelve("\x01\0\0\x01\0\0\x02\0\0\x01\0\0", 12);
    CHECK(coefficients_of("t.npy", npy("|i1", "(2, 6)", twelve), with_bits(sections(), 0)).numbers ==
          Numbers{1, 0, 0, 0, 0, 2, 0, 0, 0, 0});
    CHECK(refusal("t.npy", npy("<f8", "(1,)", std::string("\0\0\0\0\0\0\xF8\x7F", 8)), taps())
              .find("number 1 is not finite / save finite numbers of at most 53 bits") != std::string::npos);
    CHECK(refusal("t.npy", npy("<i8", "(1,)", std::string("\1\0\0\0\0\0\x20\0", 8)), taps())
              .find("number 1 is beyond the 53 bits") != std::string::npos);
    CHECK(refusal("t.npy", npy("<i2", "(3,)", two), taps())
              .find("the file holds 4 bytes of numbers, its header says 3 x 1 of 2 bytes") != std::string::npos);
    CHECK(refusal("t.npy", npy("<i2", "(0,)", ""), taps()).find("the array is empty") != std::string::npos);
    CHECK(refusal("t.npy", npy("|i1", "(262145,)", std::string(262145, '\1')), taps()).find("more than 262144") !=
          std::string::npos);
    CHECK(refusal("t.npy", "no", taps()).find("this is no NPY file") != std::string::npos);
    FileWords named = taps();
    named.array = "h";
    CHECK(refusal("t.npy", npy("<i2", "(2,)", two), named) ==
          "plan file_array: file_array chooses in a C source or a text file, an NPY holds one array / leave it out");
}
