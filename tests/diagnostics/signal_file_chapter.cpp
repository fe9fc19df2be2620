// Files of samples, CSV and NPY.
#include <cstdint>
#include <cstring>
#include <limits>
#include <string>
#include <vector>

#include "runner/config/signal_file.hpp"
#include "stimuli/npy.hpp"
#include "stimuli/stimulus.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct File {
    std::string_view done;
    std::string bytes;
};

template <class T>
std::string npy(NpyType type, const std::vector<T>& values, int channels = 1) {
    const auto header = npy_header(type, static_cast<std::int64_t>(values.size()) / channels, channels);
    std::string bytes(reinterpret_cast<const char*>(header.data()), header.size());
    bytes.append(reinterpret_cast<const char*>(values.data()), values.size() * sizeof(T));
    return bytes;
}

/// An NPY file of version 1.0 with that dictionary and no samples.
std::string npy_of(const std::string& dictionary) {
    std::string bytes("\x93NUMPY\x01\x00", 8);
    const std::size_t length = dictionary.size() + 1;
    bytes += static_cast<char>(length & 0xff);
    bytes += static_cast<char>(length >> 8);
    return bytes + dictionary + "\n";
}

std::string columns(int count) {
    std::string line = "1";
    for (int c = 1; c < count; ++c) line += ",1";
    return line + "\n";
}

std::vector<File> csv_files() {
    return {
        {"nothing but comments", "# CW-7\n"},
        {"a word among the numbers", "0.5\nhalf\n"},
        {"a decimal comma", "0,5;1\n0,25;2\n"},
        {"a NaN", "0.5\nnan\n"},
        {"an empty cell", "1,2\n3,\n"},
        {"a line with more columns", "1,2\n3,4,5\n"},
        {"a line with fewer columns", "1,2\n3\n"},
        {"a line with one column more than one", "1\n3,4\n"},
        {"two columns of one name", "raw,raw\n1,2\n"},
        {"too many columns", columns(257)},
        {"a rate that is none", "# rate_hz = fast\n0.5\n"},
        {"two rates", "# rate_hz = 1200\n# rate_hz = 600\n0.5\n"},
        {"times that do not grow", "time_s,raw\n0.0,1\n0.0,2\n"},
        {"times with a gap", "time_s,raw\n0.0,1\n0.001,2\n0.003,3\n0.004,4\n"},
        {"times that contradict the rate", "# rate_hz = 1200\ntime_s,raw\n0.0,1\n0.001,2\n0.002,3\n"},
        {"times alone", "time_s\n0.0\n0.001\n"},
    };
}

std::vector<File> npy_files() {
    const std::string good = npy(NpyType::int16, std::vector<std::int16_t>{1, 2, 3});
    std::string version = good;
    version[6] = '\x03';
    std::string long_header = good.substr(0, 8) + "\xff\xff";
    return {
        {"not NPY inside", "1\n2\n"},
        {"cut in its first bytes", good.substr(0, 7)},
        {"cut in its header", good.substr(0, 50)},
        {"cut in its samples", good.substr(0, good.size() - 1)},
        {"another version", version},
        {"a header that is too long", long_header},
        {"no dictionary", npy_of("[]")},
        {"a key without quotes", npy_of("{descr: '<i2'}")},
        {"a key without an end", npy_of("{'descr")},
        {"no colon", npy_of("{'descr' '<i2'}")},
        {"no comma", npy_of("{'descr': '<i2' 'shape': (3,)}")},
        {"something behind the dictionary", npy_of("{'descr': '<i2', 'fortran_order': False, 'shape': (3,)} x")},
        {"no type", npy_of("{'fortran_order': False, 'shape': (3,)}")},
        {"no order", npy_of("{'descr': '<i2', 'shape': (3,)}")},
        {"no shape", npy_of("{'descr': '<i2', 'fortran_order': False}")},
        {"an unknown key", npy_of("{'colour': 3}")},
        {"a key twice", npy_of("{'descr': '<i2', 'descr': '<i2'}")},
        {"records", npy_of("{'descr': [('t', '<f8')]}")},
        {"a type without quotes", npy_of("{'descr': 3}")},
        {"complex numbers", npy_of("{'descr': '<c16'}")},
        {"an order that is neither", npy_of("{'fortran_order': 0}")},
        {"columns first", npy_of("{'descr': '<i2', 'fortran_order': True, 'shape': (3, 2)}")},
        {"a shape that is no tuple", npy_of("{'shape': 3}")},
        {"a shape without a comma", npy_of("{'shape': (3 2)}")},
        {"a shape that is a number in brackets", npy_of("{'shape': (3)}")},
        {"a shape of words", npy_of("{'shape': (three,)}")},
        {"three dimensions", npy_of("{'shape': (3, 2, 2)}")},
        {"an empty array", npy(NpyType::int16, std::vector<std::int16_t>{})},
        {"too many columns", npy(NpyType::int8, std::vector<std::int8_t>(257), 257)},
        {"a NaN", npy(NpyType::float64, std::vector<double>{0.5, std::numeric_limits<double>::quiet_NaN()})},
        {"an infinity in a second column",
         npy(NpyType::float64, std::vector<double>{0.5, std::numeric_limits<double>::infinity()}, 2)},
        {"a whole number beyond 53 bits", npy(NpyType::int64, std::vector<std::int64_t>{std::int64_t{1} << 60})},
    };
}

void show_files(Page& page, const std::string& name, const std::vector<File>& files) {
    for (const File& file : files) {
        const auto read = read_signal_file({name, "./" + name, 1200.0}, file.bytes);
        const auto* text = std::get_if<std::string>(&read);
        page.show(file.done, text == nullptr ? std::string() : *text);
    }
}

struct Use {
    std::string_view done, signal, stimulus;
};

void show_uses(Page& page) {
    FakeFiles files;
    files.contents["./two.csv"] = "raw,filtered\n1,2\n3,4\n";
    files.contents["./timed.csv"] = "time_s,raw\n0.0,1\n0.000833333,2\n0.001666667,3\n";
    files.contents["./five.csv"] = "1\n2\n3\n4\n5\n";
    files.contents["./large.csv"] = "1\n40000\n";
    files.contents["./ratios.csv"] = "0.5\n1.5\n";
    files.contents["./slow.csv"] = "# rate_hz = 600\n0.5\n0.25\n";
    const std::string_view q15 = "input = \"q15\"\noutput = \"q15\"\n", f32 = "input = \"f32\"\noutput = \"f32\"\n";
    const std::vector<Use> uses = {
        {"a file that is not there", q15, "file = \"belt.csv\"\n"},
        {"a number for a file", q15, "file = 3\n"},
        {"two columns and no word which", q15, "file = \"two.csv\"\n"},
        {"a column that is not there", q15, "file = \"two.csv\"\ncolumn = \"row\"\n"},
        {"the column of the times", q15, "file = \"timed.csv\"\ncolumn = \"1\"\n"},
        {"more samples than the file has", q15, "file = \"five.csv\"\nlength_samples = 6\n"},
        {"a file repeated beyond the longest stimulus", q15, "file = \"five.csv\"\nrepeat = 10000000000\n"},
        {"a code beyond the format", q15, "file = \"large.csv\"\n"},
        {"a ratio beyond full scale", q15, "file = \"ratios.csv\"\n"},
        {"ratios that are said to be codes", q15, "file = \"ratios.csv\"\nholds = \"codes\"\n"},
        {"codes of a format that has none", f32, "file = \"five.csv\"\nholds = \"codes\"\n"},
        {"values in a unit that is nowhere explained", q15, "file = \"five.csv\"\nholds = \"unit\"\n"},
        {"a file of another rate", q15, "file = \"slow.csv\"\n"},
        {"a rate in the plan that is another", q15, "file = \"five.csv\"\nrecorded_rate_hz = 600.0\n"},
    };
    for (const Use& use : uses) {
        Parts parts;
        parts.signal = "rate_hz = 1200.0\n" + std::string(use.signal);
        parts.rule = "kind = \"error\"\nmax_ratio = 0.5\n";
        parts.stimulus = "shape = \"file\"\n" + std::string(use.stimulus);
        show_plan(page, use.done, parts.text(), files);
    }
    Parts shorter;
    shorter.signal = "rate_hz = 1200.0\n" + std::string(q15);
    shorter.rule = "kind = \"error\"\nmax_lsb = 1\n";
    shorter.stimulus = "shape = \"step\"\nlength_samples = 3\nadd = [{ shape = \"file\", file = \"five.csv\" }]\n";
    show_plan(page, "a file added to a shorter stimulus", shorter.text(), files);
    // Files that were never read from a disk.
    const auto made = [&](std::string_view done, SignalFile file) {
        ParameterValues values;
        values.set("file", std::make_shared<const SignalFile>(std::move(file)));
        page.show(done, make_stimulus("file", values, {1200.0, *sample_format("q15")}));
    };
    made("a file without columns", {"none.csv", {}, {}, true, std::nullopt});
    made("a column without samples", {"none.csv", {"raw"}, {{}}, true, std::nullopt});
    made("a sample that is not finite",
         {"nan.csv", {"raw"}, {{std::numeric_limits<double>::quiet_NaN()}}, true, std::nullopt});
}

/// The mask of a response rule.
void show_masks(Page& page) {
    const std::string header = "from_hz,to_hz,min_db,max_db\n";
    const std::vector<File> masks = {
        {"a mask without rows", header},
        {"a mask without limits", header + "0,100,,\n"},
        {"a mask with another header", "frequency,gain\n0,1\n"},
        {"a mask with semicolons", "from_hz;to_hz;min_db;max_db\n"},
        {"a mask with a short row", header + "0,100,-1\n"},
        {"a mask without a frequency", header + "0,,-1,1\n"},
        {"a mask with a word for a limit", header + "0,100,low,1\n"},
        {"a mask with an infinite limit", header + "0,100,-inf,1\n"},
        {"a mask below 0", header + "-1,100,-1,1\n"},
        {"a row that runs backwards", header + "100,100,-1,1\n"},
        {"a mask above Nyquist", header + "0,601,-1,1\n"},
        {"limits that cross in a mask", header + "0,100,1,-1\n"},
        {"a mask with a gap", header + "0,100,-1,1\n110,600,,-20\n"},
        {"rows that overlap", header + "0,100,-1,1\n90,600,,-20\n"},
        {"a mask that is no text", header + std::string(1, '\0')},
    };
    const auto parts_of = [](const std::string& words) {
        Parts parts;
        parts.rule = "kind = \"response\"\n" + words;
        return parts;
    };
    for (const File& mask : masks) {
        FakeFiles files;
        files.contents["./mask.csv"] = mask.bytes;
        show_plan(page, mask.done, parts_of("mask_file = \"mask.csv\"\n").text(), files);
    }
    FakeFiles files;
    files.contents["./mask.csv"] = header + "0,500,-90,1\n";
    files.contents["./narrow.csv"] = header + "0.1,0.2,-90,1\n";
    std::string rows = header;
    for (int row = 0; row <= 10000; ++row) rows += std::to_string(row) + "," + std::to_string(row + 1) + ",-1,\n";
    files.contents["./long.csv"] = rows;
    show_plan(page, "a mask that is not there", parts_of("mask_file = \"gone.csv\"\n").text(), files);
    show_plan(page, "a number for a mask", parts_of("mask_file = 3\n").text(), files);
    Parts fast = parts_of("mask_file = \"long.csv\"\n");
    fast.signal = "rate_hz = 48000.0\ninput = \"q15\"\noutput = \"q15\"\n";
    show_plan(page, "a mask with too many rows", fast.text(), files);
    show_plan(page, "two masks", parts_of("mask_file = \"mask.csv\"\nmask = \"a-weighting class 1\"\n").text(), files);
    show_plan(page, "a mask between the bins", parts_of("mask_file = \"narrow.csv\"\n").text(), files);
    Parts slow = parts_of("mask_file = \"mask.csv\"\n");
    slow.of_case = "rate_hz = 600.0\n";
    show_plan(page, "a mask above Nyquist of a case", slow.text(), files);
}

}  // namespace

void signal_file_chapter(Page& page) {
    page.chapter("Samples of a CSV file");
    show_files(page, "belt.csv", csv_files());
    page.chapter("Samples of an NPY file");
    show_files(page, "belt.npy", npy_files());
    page.chapter("Samples of a file as a stimulus");
    show_uses(page);
    page.chapter("Masks of a CSV file");
    show_masks(page);
}

}  // namespace halflsb::diagnostics
