// NPY headers. NumPy itself reads ours, and we read NumPy's, in tests/reference/stimuli_test.py.
#include "stimuli/npy.hpp"

#include <catch2/catch.hpp>
#include <limits>
#include <string>
#include <vector>

#include "make.hpp"

using namespace halflsb;

namespace {

std::vector<std::byte> bytes_of_text(std::string_view text) {
    std::vector<std::byte> bytes;
    for (const char c : text) bytes.push_back(static_cast<std::byte>(c));
    return bytes;
}

/// A file of version 1.0 with this dictionary.
std::vector<std::byte> file_with(std::string_view dictionary) {
    std::string text = "\x93NUMPY";
    text += '\1';
    text += '\0';
    text += static_cast<char>(dictionary.size() & 0xff);
    text += static_cast<char>(dictionary.size() >> 8);
    return bytes_of_text(text + std::string(dictionary));
}

std::string parsed(const std::vector<std::byte>& file) {
    const auto header = parse_npy_header(file);
    if (!header) {
        CHECK(header.error().kind == ErrorKind::input);
        return to_text(header.error());
    }
    return std::string(descriptor_of(header->type)) + " " + std::to_string(header->count) + " from " +
           std::to_string(header->data_offset);
}

std::string parsed(std::string_view dictionary) { return parsed(file_with(dictionary)); }

constexpr std::string_view good = "{'descr': '<i2', 'fortran_order': False, 'shape': (7,), }\n";

}  // namespace

TEST_CASE("npy: our header is 128 bytes, whatever the count, and as NumPy writes it", "[stimuli]") {
    const auto header = npy_header(NpyType::int16, 1'000'000);
    std::string text;
    for (const std::byte b : header) text += static_cast<char>(b);
    // SEEN: the layout in NumPy's documentation of the format, version 1.0.
    CHECK(text.substr(0, 6) == "\x93NUMPY");
    CHECK(text.substr(6, 4) == std::string("\x01\x00\x76\x00", 4));
    CHECK(text.substr(10, 63) == "{'descr': '<i2', 'fortran_order': False, 'shape': (1000000,), }");
    CHECK(text.find_first_not_of(' ', 73) == 127);
    CHECK(text.back() == '\n');
}

TEST_CASE("npy: what we write we read, up to the largest count", "[stimuli]") {
    for (const NpyType type : {NpyType::int16, NpyType::int32, NpyType::float32, NpyType::float64}) {
        for (const std::int64_t count : {std::int64_t{0}, std::int64_t{1}, std::int64_t{10'000'000'000},
                                         std::numeric_limits<std::int64_t>::max()}) {
            const auto bytes = npy_header(type, count);
            const auto header = parse_npy_header(bytes);
            REQUIRE(header);
            CHECK(header->type == type);
            CHECK(header->count == count);
            CHECK(header->data_offset == npy_header_bytes);
        }
    }
}

TEST_CASE("npy: each sample format has the type of its words", "[stimuli]") {
    for (const SampleFormat& format : sample_formats()) {
        CHECK(bytes_of(npy_type_of(format)) == format.word_bytes());
    }
    CHECK(descriptor_of(npy_type_of(format_named("q31"))) == "<i4");
    CHECK(descriptor_of(npy_type_of(format_named("f32"))) == "<f4");
    CHECK(bytes_of(NpyType::float64) == 8);
}

TEST_CASE("npy: keys in any order, either quote, any blanks, version 2.0", "[stimuli]") {
    CHECK(parsed(good) == "<i2 7 from 68");
    CHECK(parsed("{\"shape\":(12 , ),\"descr\":\"<f8\",\"fortran_order\":True}") == "<f8 12 from 62");
    CHECK(parsed("{ 'fortran_order' : False , 'shape' : ( 3, ) , 'descr' : '<f4' }   \n") == "<f4 3 from 78");
    std::string text = "\x93NUMPY";
    text += std::string("\x02\x00", 2);
    text += static_cast<char>(good.size());
    text += std::string("\0\0\0", 3);
    CHECK(parsed(bytes_of_text(text + std::string(good))) == "<i2 7 from 70");
}

TEST_CASE("npy: every truncation of a header is refused", "[stimuli]") {
    const auto whole = npy_header(NpyType::int32, 5);
    for (std::size_t size = 0; size < whole.size(); ++size) {
        const auto header = parse_npy_header(std::span(whole).first(size));
        REQUIRE_FALSE(header);
        REQUIRE(header.error().place == "byte " + std::to_string(size));
    }
    CHECK(parsed(std::vector<std::byte>(whole.begin(), whole.begin() + 100)) ==
          "byte 100: the file ends inside its NPY header of 128 bytes\n  it is cut off; write it again");
    CHECK(parsed(std::vector<std::byte>{}) ==
          "byte 0: the file ends inside its NPY header of 10 bytes\n  it is cut off; write it again");
}

TEST_CASE("npy: other files, versions and lengths are refused", "[stimuli]") {
    CHECK(parsed(bytes_of_text("PK\x03\x04 a zip archive")) ==
          "byte 0: this is no NPY file\n  save the array with NumPy's save()");
    CHECK(parsed(bytes_of_text("\x93NUMPX")) == "byte 5: this is no NPY file\n  save the array with NumPy's save()");
    auto file = file_with(good);
    file[6] = std::byte{3};
    CHECK(parsed(file) == "byte 6: NPY version 3.0 is not taken\n  save as version 1.0 or 2.0");
    file[6] = std::byte{2};  // now the length is the next four bytes: far too long
    CHECK(parsed(file) ==
          "byte 8: a dictionary of 662372410 bytes is too long\n  ours need 118 bytes; the file is damaged, or no "
          "plain array");
}

TEST_CASE("npy: types and shapes that are not ours are refused", "[stimuli]") {
    CHECK(parsed("{'descr': '>i2', 'fortran_order': False, 'shape': (7,), }\n") ==
          "byte 20: elements of type '>i2' are not taken\n  save as one of |i1, |u1, <u2, <i2, <i4, <i8, <f4, <f8");
    CHECK(parsed("{'descr': [('a', '<i2')], 'fortran_order': False, 'shape': (7,), }\n") ==
          "byte 20: elements are records\n  save each column as an array of its own");
    CHECK(parsed("{'descr': '<i2', 'fortran_order': True, 'shape': (7, 2), }\n") ==
          "byte 10: several channels in Fortran order\n  save the array in C order, (samples, channels)");
    CHECK(parsed("{'descr': '<i2', 'fortran_order': False, 'shape': (7, 2, 1), }\n") ==
          "byte 60: the array has 3 dimensions\n  save one channel as a one-dimensional array, several as (samples, "
          "channels)");
    CHECK(parsed("{'descr': '<i2', 'fortran_order': False, 'shape': (), }\n") ==
          "byte 60: the array has 0 dimensions\n  save one channel as a one-dimensional array, several as (samples, "
          "channels)");
}

TEST_CASE("npy: a damaged dictionary is refused where it is damaged", "[stimuli]") {
    CHECK(parsed("") == "byte 10: the dictionary needs '{' here");
    CHECK(parsed("{}") == "byte 10: the dictionary has no 'descr'");
    CHECK(parsed("{'descr': '<i2', 'shape': (7,)}") == "byte 10: the dictionary has no 'fortran_order'");
    CHECK(parsed("{'descr': '<i2', 'fortran_order': False}") == "byte 10: the dictionary has no 'shape'");
    CHECK(parsed("{'descr': '<i2', 'descr': '<i4'}") == "byte 35: the dictionary has 'descr' twice");
    CHECK(parsed("{'order': 1}") == "byte 19: the dictionary has an unknown key 'order'");
    CHECK(parsed("{descr: 1}") == "byte 11: the dictionary needs a key in quotes here");
    CHECK(parsed("{'descr") == "byte 11: the dictionary needs a closing quote here");
    CHECK(parsed("{'descr' '<i2'}") == "byte 19: the dictionary needs ':' here");
    CHECK(parsed("{'descr': '<i2' 'shape'") == "byte 26: the dictionary needs ',' or '}' here");
    CHECK(parsed("{'fortran_order': 0}") == "byte 28: the dictionary needs True or False here");
    CHECK(parsed("{'shape': 7}") == "byte 20: the dictionary needs '(' here");
    CHECK(parsed("{'shape': (7)}") == "byte 23: the dictionary needs ',' after the only length here");
    CHECK(parsed("{'shape': (-7,)}") == "byte 21: the dictionary needs a length here");
    CHECK(parsed("{'shape': (9223372036854775808,)}") == "byte 21: the dictionary needs a length here");
    CHECK(parsed("{'shape': (7 8)}") == "byte 23: the dictionary needs ',' or ')' here");
    CHECK(parsed("{'shape': (7,") == "byte 23: the dictionary needs a length here");
    CHECK(parsed(std::string(good.substr(0, good.size() - 1)) + "x\n") ==
          "byte 67: the dictionary needs only blanks up to the newline here");
}
