// CSV and NPY stimulus files: what they hold, and every refusal whole.
#include "runner/config/signal_file.hpp"

#include <bit>
#include <catch2/catch.hpp>
#include <cstring>

#include "stimuli/npy.hpp"

using namespace halflsb;

namespace {

SignalFile file_of(const std::string& bytes, std::optional<double> rate_hz = std::nullopt,
                   const std::string& name = "w.csv") {
    auto read = read_signal_file({name, "root/" + name, rate_hz}, bytes);
    if (const auto* text = std::get_if<std::string>(&read)) FAIL(*text);
    return std::get<SignalFile>(std::move(read));
}

std::string refusal_of(const std::string& bytes, std::optional<double> rate_hz = std::nullopt,
                       const std::string& name = "w.csv") {
    const auto read = read_signal_file({name, "root/" + name, rate_hz}, bytes);
    const auto* text = std::get_if<std::string>(&read);
    return text == nullptr ? std::string() : *text;
}

using Columns = std::vector<std::vector<double>>;

template <class T>
std::string npy(NpyType type, const std::vector<T>& values, int channels = 1) {
    const auto header = npy_header(type, static_cast<std::int64_t>(values.size()) / channels, channels);
    std::string bytes(reinterpret_cast<const char*>(header.data()), header.size());
    bytes.append(reinterpret_cast<const char*>(values.data()), values.size() * sizeof(T));
    return bytes;
}

constexpr const char* how =
    "\n  write the same count of numbers on every line, with a decimal point, between commas, semicolons or tabs";

}  // namespace

TEST_CASE("signal file: one column of CSV, with comments, blanks, signs and either line ending", "[config]") {
    const SignalFile file = file_of("# CW-7, belt at rest\r\n\r\n 0.5 # first\r\n+1e-3\n-2.5E+1\n  \n3");
    CHECK(file.path == "w.csv");
    CHECK(file.names == std::vector<std::string>{""});
    CHECK(file.columns == Columns{{0.5, 0.001, -25.0, 3.0}});
    CHECK(!file.whole_numbers);
    CHECK(!file.rate_hz);
}

TEST_CASE("signal file: columns between commas, semicolons and tabs, with names or without", "[config]") {
    for (const std::string separator : {",", ";", "\t", " , "}) {
        const SignalFile file =
            file_of("raw" + separator + "\"filtered\"\n1" + separator + "2\n-3" + separator + "4\n");
        CHECK(file.names == std::vector<std::string>{"raw", "filtered"});
        CHECK(file.columns == Columns{{1.0, -3.0}, {2.0, 4.0}});
        CHECK(file.whole_numbers);
        CHECK(file_of("1" + separator + "2\n").names == std::vector<std::string>{"", ""});
    }
    CHECK(file_of("\xC2\xB5g\n7\n").names == std::vector<std::string>{"\xC2\xB5g"});
}

TEST_CASE("signal file: a fraction or an exponent anywhere makes the numbers no whole ones", "[config]") {
    CHECK(file_of("1\n2\n").whole_numbers);
    CHECK(!file_of("1\n2.0\n").whole_numbers);
    CHECK(!file_of("1\n2e1\n").whole_numbers);
    CHECK(file_of("time_s,raw\n0.0,1\n0.5,2\n").whole_numbers);
}

TEST_CASE("signal file: a comment states the sample rate", "[config]") {
    CHECK(file_of("# rate_hz = 1200\n1\n").rate_hz == 1200.0);
    CHECK(file_of("1\n# rate_hz: 999.5 \n2\n").rate_hz == 999.5);
    CHECK(!file_of("# the rate_hz = 1200 was chosen\n1\n").rate_hz);
    CHECK(refusal_of("# rate_hz = fast\n1\n") ==
          "root/w.csv:1:13: \"fast\" is no sample rate\n    # rate_hz = fast\n                ^\n  write # rate_hz = "
          "1200, or no such comment");
    CHECK(
        refusal_of("# rate_hz = 0\n1\n") ==
        "root/w.csv:1:13: \"0\" is no sample rate\n    # rate_hz = 0\n                ^\n  write # rate_hz = 1200, or "
        "no such comment");
    CHECK(refusal_of("# rate_hz = 1200\n# rate_hz = 1201\n1\n") ==
          "root/w.csv:2:13: a second rate_hz, beside 1200 Hz\n    # rate_hz = 1201\n                ^\n  keep the one "
          "that is right");
}

TEST_CASE("signal file: times state the sample rate and are no data", "[config]") {
    // 1200 Hz to the microsecond, as a logger prints it.
    const std::string times = "time_s,raw\n0.000000,5\n0.000833,6\n0.001667,7\n0.002500,8\n";
    const SignalFile file = file_of(times, 1200.0);
    CHECK(file.rate_hz == 1200.0);
    CHECK(file.names == std::vector<std::string>{"raw"});
    CHECK(file.time_column == 1);
    CHECK(file_of("raw,time_s\n5,0\n6,1\n").time_column == 2);
    CHECK(file_of("raw\n5\n").time_column == 0);
    CHECK(file.columns == Columns{{5.0, 6.0, 7.0, 8.0}});
    CHECK(file_of(times).rate_hz == Approx(1200.0).epsilon(1e-6));
    // Another rate is stated as it is, for the shape to refuse.
    CHECK(file_of(times, 1000.0).rate_hz == Approx(1200.0).epsilon(1e-6));
    CHECK(!file_of("time_s,raw\n0.5,1\n", 1200.0).rate_hz);
    // Beside a comment that says the same.
    CHECK(file_of("# rate_hz = 1200\n" + times, 1200.0).columns == Columns{{5.0, 6.0, 7.0, 8.0}});
    CHECK(file_of("# rate_hz = 1200\n" + times).rate_hz == 1200.0);
}

TEST_CASE("signal file: a rate is held to 1e-6, from both sides", "[config]") {
    const auto times_at = [](double rate_hz) {
        std::string text = "raw,time_s\n";
        for (int i = 0; i < 1001; ++i) {
            char line[64];
            std::snprintf(line, sizeof line, "%d,%.12f\n", i, static_cast<double>(i) / rate_hz);
            text += line;
        }
        return text;
    };
    CHECK(file_of(times_at(1000.0 * (1.0 + 0.9e-6)), 1000.0).rate_hz == 1000.0);
    CHECK(file_of(times_at(1000.0 * (1.0 - 0.9e-6)), 1000.0).rate_hz == 1000.0);
    CHECK(file_of(times_at(1000.0 * (1.0 + 1.1e-6)), 1000.0).rate_hz != 1000.0);
    CHECK(file_of(times_at(1000.0 * (1.0 - 1.1e-6)), 1000.0).rate_hz != 1000.0);
}

TEST_CASE("signal file: a missing sample shows in the times", "[config]") {
    const std::string mend =
        "\n  samples must be evenly spaced: mend the record, give the times more digits, or leave the column out";
    CHECK(refusal_of("time_s,raw\n0.000,1\n0.001,2\n0.003,3\n0.004,4\n", 1000.0) ==
          "root/w.csv:4:1: the step of time_s is not constant: 0.003 s at sample 2, where 1000 Hz wants 0.002 s\n    "
          "0.003,3\n    ^" +
              mend);
    // Nobody said which rate was meant.
    CHECK(refusal_of("time_s,raw\n0,1\n1,2\n3,3\n4,4\n") ==
          "root/w.csv:3:1: the step of time_s is not constant: 1 s at sample 1, where 0.75 Hz wants "
          "1.3333333333333333 s\n    1,2\n    ^" +
              mend);
    CHECK(file_of("time_s,raw\n0,1\n1,2\n2,3\n").rate_hz == 1.0);
    // Zero with the lowest exponents that 32 and 64 bits hold.
    CHECK(file_of("time_s,raw\n0.0e-2147483648,1\n1,2\n2,3\n").rate_hz == 1.0);
    CHECK(file_of("time_s,raw\n0.0e-9223372036854775808,1\n1,2\n2,3\n").rate_hz == 1.0);
    // Too coarse to tell a missing sample from a rounded time.
    CHECK(refusal_of("time_s,raw\n0.00,1\n0.01,2\n0.01,3\n", 200.0) ==
          "root/w.csv:3:1: the step of time_s is not constant: 0.01 s at sample 1, where 200 Hz wants 0.005 s\n    "
          "0.01,2\n    ^" +
              mend);
    CHECK(refusal_of("time_s,raw\n0.5,1\n0.5,2\n") ==
          "root/w.csv:2:1: the times of time_s do not grow\n    0.5,1\n    ^\n  give the time of each sample in "
          "seconds, or leave the column out");
    CHECK(refusal_of("# rate_hz = 500\ntime_s,raw\n0.000,1\n0.001,2\n0.002,3\n0.003,4\n0.004,5\n", 1000.0) ==
          "root/w.csv:3:1: time_s says 1000 Hz, the comment 500 Hz\n    0.000,1\n    ^\n  keep the one that is right");
    CHECK(refusal_of("time_s\n0.0\n0.5\n") ==
          "root/w.csv:1:1: the file holds times and no samples\n    time_s\n    ^\n  add a column with the samples");
}

TEST_CASE("signal file: ragged rows, text, NaN, gaps and decimal commas are refused at their place", "[config]") {
    CHECK(refusal_of("1,2\n3\n") ==
          std::string("root/w.csv:2:1: 1 column in this line, 2 in those above\n    3\n    ^") + how);
    CHECK(refusal_of("1,2\n3,4,5\n") ==
          std::string("root/w.csv:2:5: 3 columns in this line, 2 in those above\n    3,4,5\n        ^") + how);
    CHECK(refusal_of("1\n2\nx3\n") == std::string("root/w.csv:3:1: \"x3\" is not one number\n    x3\n    ^") + how);
    CHECK(refusal_of("a,b\n1,c\n") == std::string("root/w.csv:2:3: \"c\" is not one number\n    1,c\n      ^") + how);
    CHECK(refusal_of("1,b\n") == std::string("root/w.csv:1:3: \"b\" is not one number\n    1,b\n      ^") + how);
    CHECK(refusal_of("1 2\n") == std::string("root/w.csv:1:1: \"1 2\" is not one number\n    1 2\n    ^") + how);
    CHECK(refusal_of("1,,2\n") == std::string("root/w.csv:1:3: a number is missing\n    1,,2\n      ^") + how);
    CHECK(refusal_of("1,2\n3,\n") == std::string("root/w.csv:2:3: a number is missing\n    3,\n      ^") + how);
    const std::string finite = "\n  a sample is a finite number; mend or cut the record";
    CHECK(refusal_of("1\nnan\n") == "root/w.csv:2:1: \"nan\" is no finite number\n    nan\n    ^" + finite);
    CHECK(refusal_of("raw,b\n1,-inf\n") ==
          "root/w.csv:2:3: \"-inf\" is no finite number\n    1,-inf\n      ^" + finite);
    CHECK(
        refusal_of("0,5;0,25\n") ==
        "root/w.csv:1:1: \"0,5\" is not one number: has it a decimal comma?\n    0,5;0,25\n    ^\n  write numbers with "
        "a decimal point, 0.5");
    CHECK(refusal_of("raw\n0,5\n") ==
          "root/w.csv:2:3: 2 columns in this line, 1 in those above: have the numbers a decimal comma?\n    0,5\n      "
          "^\n  write numbers with a decimal point, 0.5");
    CHECK(refusal_of("a,a\n1,2\n") ==
          "root/w.csv:1:3: two columns are called \"a\"\n    a,a\n      ^\n  give each column a name of its own");
}

TEST_CASE("signal file: nothing in it, or no text at all", "[config]") {
    const std::string none = "there is no sample in the file";
    CHECK(refusal_of("") == "root/w.csv:1:1: " + none + "\n    \n    ^" + how);
    CHECK(refusal_of("# only\n") == "root/w.csv:1:1: " + none + "\n    # only\n    ^" + how);
    CHECK(refusal_of("raw\n") == "root/w.csv:1:1: " + none + "\n    raw\n    ^" + how);
    CHECK(refusal_of(std::string("1\n\0", 3)) ==
          "root/w.csv:2:1: a NUL byte; this is not a text file\n    \\x00\n    ^\n  save it as UTF-8 text");
    std::string wide = "1";
    for (int i = 0; i < 255; ++i) wide += ",1";
    CHECK(file_of(wide).columns.size() == 256);
    CHECK(refusal_of(wide + ",1").find("257 columns, the most are 256") != std::string::npos);
}

TEST_CASE("signal file: every type of NPY, in one dimension and two", "[config]") {
    const auto columns_of = [](const std::string& bytes) { return file_of(bytes, std::nullopt, "w.npy"); };
    CHECK(columns_of(npy<std::int8_t>(NpyType::int8, {-128, 127})).columns == Columns{{-128.0, 127.0}});
    CHECK(columns_of(npy<std::uint8_t>(NpyType::uint8, {0, 255})).columns == Columns{{0.0, 255.0}});
    CHECK(columns_of(npy<std::uint16_t>(NpyType::uint16, {65535})).columns == Columns{{65535.0}});
    CHECK(columns_of(npy<std::int16_t>(NpyType::int16, {-32768})).columns == Columns{{-32768.0}});
    CHECK(columns_of(npy<std::int32_t>(NpyType::int32, {INT32_MIN})).columns == Columns{{-2147483648.0}});
    CHECK(columns_of(npy<std::int64_t>(NpyType::int64, {std::int64_t{1} << 53})).columns ==
          Columns{{9007199254740992.0}});
    CHECK(columns_of(npy<float>(NpyType::float32, {0.1F})).columns == Columns{{static_cast<double>(0.1F)}});
    CHECK(columns_of(npy<double>(NpyType::float64, {0.1, -2.0})).columns == Columns{{0.1, -2.0}});
    CHECK(columns_of(npy<double>(NpyType::float64, {0.1})).whole_numbers == false);
    const SignalFile two = columns_of(npy<std::int16_t>(NpyType::int16, {1, 2, 3, 4, 5, 6}, 2));
    CHECK(two.columns == Columns{{1.0, 3.0, 5.0}, {2.0, 4.0, 6.0}});
    CHECK(two.names == std::vector<std::string>{"1", "2"});
    CHECK(two.whole_numbers);
    CHECK(columns_of(npy<std::int16_t>(NpyType::int16, {1})).names == std::vector<std::string>{""});
    // Known by its first bytes, whatever it is called.
    CHECK(file_of(npy<std::int16_t>(NpyType::int16, {7})).columns == Columns{{7.0}});
}

TEST_CASE("signal file: an NPY that is cut, empty, not finite or none at all", "[config]") {
    const auto refused = [](const std::string& bytes) { return refusal_of(bytes, std::nullopt, "w.npy"); };
    const std::string whole = npy<std::int16_t>(NpyType::int16, {1, 2, 3});
    const std::string anew = "\n  it was cut, or changed after it was saved: save it anew";
    CHECK(refused(whole.substr(0, 133)) ==
          "root/w.npy: byte 133: the file holds 5 bytes of data, its header says 3 x 1 elements of 2 bytes" + anew);
    CHECK(refused(whole + "x") ==
          "root/w.npy: byte 135: the file holds 7 bytes of data, its header says 3 x 1 elements of 2 bytes" + anew);
    CHECK(refused(npy<std::int16_t>(NpyType::int16, {})) ==
          "root/w.npy: byte 128: the array is empty\n  save an array of at least one sample");
    CHECK(refused(npy<double>(NpyType::float64, {1.0, std::bit_cast<double>(0x7ff8000000000000)})) ==
          "root/w.npy: byte 136: nan is no finite number, sample 1\n  save finite numbers only");
    CHECK(refused(npy<float>(NpyType::float32, {1.0F, 2.0F, 3.0F, -std::bit_cast<float>(0x7f800000)}, 2)) ==
          "root/w.npy: byte 140: -inf is no finite number, sample 1 of column 2\n  save finite numbers only");
    CHECK(refused(npy<std::int64_t>(NpyType::int64, {(std::int64_t{1} << 53) + 1})) ==
          "root/w.npy: byte 128: 9007199254740993 is no sample's number, sample 0\n  save finite numbers only");
    CHECK(refused("1\n2\n").find("root/w.npy: byte 0: ") == 0);
    CHECK(refused(npy<std::int8_t>(NpyType::int8, std::vector<std::int8_t>(257), 257)) ==
          "root/w.npy: byte 128: 257 columns, the most are 256\n  save it as (samples, channels)");
}
