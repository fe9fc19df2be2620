// Files of coefficients in a plan: its words, the places of what is wrong, and what is kept of the files.
#include "runner/config/coefficient_files.hpp"

#include <filesystem>
#include <fstream>

#include "runner/config/resolved_plan.hpp"
#include "tests/support/config_texts.hpp"
#include "tests/support/temporary_folder.hpp"

using namespace halflsb;

namespace {

const std::string fir = "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n";

/// The good plan with another stage; its first line is 11.
std::string with_stage(const std::string& words) { return with(good_plan, fir, words); }

std::string fir_of(const std::string& path, const std::string& words = "") {
    return with_stage("kind = \"fir\"\ntaps_file = \"" + path + "\"\n" + words);
}

std::string cascade_of(const std::string& path, const std::string& words = "") {
    return with_stage("kind = \"biquad-cascade\"\nsections_file = \"" + path + "\"\n" + words);
}

FakeFiles files_with(const std::string& path, const std::string& bytes) {
    FakeFiles files;
    files.contents["./" + path] = bytes;
    return files;
}

const std::string header =
    "/* CW-7 */\n"
    "static const int16_t belt[3] = {8192, 16384, 8192};\n"
    "static const int16_t notch[] = {15966, -30844, 15966, 30844, -15548};\n";

}  // namespace

TEST_CASE("coefficient files: the firmware's own header gives taps, and its fraction bits", "[config]") {
    const FakeFiles files = files_with("fw/taps.h", header);
    const Plan plan = plan_of(fir_of("fw/taps.h", "file_array = \"belt\"\nfile_fraction_bits = 15\n"), files);
    CHECK(std::get<Fir>(plan.filter[0].design).taps == std::vector<double>{0.25, 0.5, 0.25});
    CHECK(plan.filter[0].coefficient_fraction_bits == 15);
    CHECK(plan.filter[0].arithmetic.coefficient_fraction_bits == 15);
    // Kept for the record as it was.
    REQUIRE(plan.parts.size() == 2);
    CHECK(plan.parts[1].path == "fw/taps.h");
    CHECK(plan.parts[1].bytes == header);
    const Plan sections = plan_of(
        cascade_of("fw/taps.h", "file_array = \"notch\"\nfile_fraction_bits = 14\nfile_feedback = \"added\"\n"), files);
    const BiquadSection s = std::get<BiquadCascade>(sections.filter[0].design).sections.at(0);
    CHECK(s.b1 == -30844.0 / 16384.0);
    CHECK(s.a1 == -30844.0 / 16384.0);
    CHECK(s.a2 == 15548.0 / 16384.0);
    CHECK(sections.filter[0].coefficient_fraction_bits == 14);
    // A scale is no word length.
    const Plan scaled = plan_of(fir_of("fw/taps.h", "file_array = \"belt\"\nfile_scale = 3.0517578125e-05\n"), files);
    CHECK(!scaled.filter[0].coefficient_fraction_bits);
    CHECK(std::get<Fir>(scaled.filter[0].design).taps == std::vector<double>{0.25, 0.5, 0.25});
}

TEST_CASE("coefficient files: the fraction bits of a file and of the arithmetic must agree", "[config]") {
    const FakeFiles files = files_with("taps.h", "int16_t h[] = {8192, 16384, 8192};\n");
    const std::string bits = "file_fraction_bits = 15\n";
    CHECK(plan_problems(fir_of("taps.h", bits + "coefficient_fraction_bits = 15\n"), files).empty());
    std::string text = fir_of("taps.h", bits + "coefficient_fraction_bits = 14\n");
    CHECK(plan_problems(text, files) ==
          message(text, 14, "14",
                  "coefficient_fraction_bits = 14, and the file holds integers of file_fraction_bits = 15",
                  "the file is what the firmware stores: leave coefficient_fraction_bits out, or correct one of them"));
    const std::string common = "[arithmetic]\ncoefficient_fraction_bits = ";
    CHECK(plan_problems(fir_of("taps.h", bits) + common + "15\n", files).empty());
    text = fir_of("taps.h", bits) + common + "14\n";
    CHECK(
        plan_problems(text, files) ==
        message(text, 13, "15", "file_fraction_bits = 15, and the arithmetic says coefficient_fraction_bits = 14",
                "write coefficient_fraction_bits = 15 in this [[filter]] if its coefficients are stored so, or correct "
                "one of them"));
    text = fir_of("taps.h", bits + "coefficient_fraction_bits = 15\n") + common + "14\n";
    CHECK(plan_of(text, files).filter[0].coefficient_fraction_bits == 15);
    text = fir_of("taps.h", bits + "[filter.arithmetic]\ncoefficient_fraction_bits = 13\n");
    CHECK(plan_problems(text, files).find("the arithmetic says coefficient_fraction_bits = 13") != std::string::npos);
    // Floats say no bits, whatever they are scaled by.
    const FakeFiles floats = files_with("taps.h", "float h[] = {8192.5f, 16384, 8192.5f};\n");
    CHECK(!plan_of(fir_of("taps.h", bits), floats).filter[0].coefficient_fraction_bits);
    CHECK(plan_of(fir_of("taps.h", bits + "coefficient_fraction_bits = 14\n"), floats)
              .filter[0]
              .coefficient_fraction_bits == 14);
}

TEST_CASE("coefficient files: what is wrong in a file stands at its line and column, in the plan at its key",
          "[config]") {
    const FakeFiles files = files_with("taps.h", header);
    std::string text = fir_of("taps.h");
    CHECK(plan_problems(text, files) == message(text, 12, "\"taps.h\"",
                                                "taps_file: the file holds 2 arrays: belt, notch",
                                                "choose one, for example file_array = \"belt\""));
    text = fir_of("taps.h", "file_array = \"bolt\"\n");
    CHECK(plan_problems(text, files) == message(text, 13, "\"bolt\"",
                                                "file_array = \"bolt\": the file has no such array",
                                                "its arrays are belt, notch"));
    text = fir_of("taps.h", "file_array = \"belt\"\nfile_fraction_bits = 15\nfile_count = 4\n");
    CHECK(plan_problems(text, files) ==
          message(text, 15, "4", "file_count = 4, and the file holds 3 taps",
                  "correct the one that is wrong; zeros that are none of them are file_padding_before or "
                  "file_padding_after"));
    text = cascade_of("taps.h", "file_array = \"notch\"\nfile_fraction_bits = 14\n");
    CHECK(
        plan_problems(text, files) ==
        message(text, 12, "\"taps.h\"",
                "sections_file: section 1 is unstable: a1 = 1.882568359375, a2 = -0.948974609375 put a pole at radius "
                "2.2959024",
                "the file looks negated: all is stable with file_feedback = \"added\""));
    const std::string broken = with(header, "16384", "Q15(0.5)");
    CHECK(plan_problems(fir_of("taps.h", "file_array = \"belt\"\n"), files_with("taps.h", broken)) ==
          message(broken, 2, "Q15", "\"Q15\" is called here, and what it gives is the compiler's to say",
                  "write the numbers that it gives, or print them by a program into a file of numbers", "./taps.h"));
    text = fir_of("taps.npy");
    CHECK(plan_problems(text, files_with("taps.npy", "\x93NUMPY\x07")) ==
          "./taps.npy: byte 7: the file ends inside its NPY header of 10 bytes\n  it is cut off; write it again\n");
    // Words about a file that is not there.
    text = with_stage(fir + "file_order = \"oldest-first\"\n");
    CHECK(plan_problems(text) == message(text, 13, "\"oldest-first\"",
                                         "file_order says how a file is read, and the stage names none",
                                         "name a file, or leave it out"));
    text = with_stage("kind = \"moving-average\"\npoints = 4\nfile_count = 4\n");
    CHECK(plan_problems(text).find("unknown key \"file_count\"") != std::string::npos);
}

TEST_CASE("coefficient files: taps whose scale cannot be right for the signal", "[config]") {
    // q15 in and out: a gain of 8192 makes 0.25 of the smallest step.
    std::string text = fir_of("taps.h", "file_fraction_bits = 1\n");
    CHECK(plan_problems(text, files_with("taps.h", "int16_t h[] = {8191, -8192};\n")) == "");
    CHECK(plan_problems(text, files_with("taps.h", "int16_t h[] = {8192, -8192};\n")) ==
          message(text, 13, "1",
                  "file_fraction_bits: the sizes of the taps sum up to 8192, so 1 LSB at the input could fill a "
                  "quarter of the output",
                  "say what the numbers in the file are worth: file_fraction_bits or file_scale"));
    text = fir_of("taps.txt", "file_scale = 1.52587890625e-05\n");
    CHECK(plan_problems(text, files_with("taps.txt", "1\n")).empty());
    CHECK(plan_problems(text, files_with("taps.txt", "0.5\n0.25\n")) ==
          message(text, 13, "1.5258",
                  "file_scale: the sizes of the taps sum up to 1.1444091796875e-05, so full scale at the input gives "
                  "less than half an "
                  "LSB",
                  "say what the numbers in the file are worth: file_fraction_bits or file_scale"));
}

TEST_CASE("coefficient files: a design beside the firmware's table finds them reversed", "[config]") {
    FakeFiles files = files_with("taps.h", "int16_t h[] = {8192, 16384, 4096};\n");
    files.contents["./design.txt"] = "0.12500001\n0.5\n0.25\n";
    std::string text = fir_of("taps.h", "file_fraction_bits = 15\nfile_design = \"design.txt\"\n");
    CHECK(plan_problems(text, files) == message(text, 12, "\"taps.h\"",
                                                "taps_file: the taps are those of file_design in reverse",
                                                "write file_order = \"oldest-first\""));
    const Plan plan = plan_of(text + "", [&] {
        FakeFiles right = files;
        right.contents["./design.txt"] = "0.25\n0.5\n0.12500001\n";
        return right;
    }());
    // The reference is the file; the design is only compared with it.
    CHECK(std::get<Fir>(plan.filter[0].design).taps == std::vector<double>{0.25, 0.5, 0.125});
    CHECK(plan.parts.size() == 3);
    files.contents["./design.txt"] = "0.25\n0.5\n0.2\n";
    CHECK(plan_problems(text, files) ==
          message("int16_t h[] = {8192, 16384, 4096};\n", 1, "4096",
                  "taps[2] is 0.125, in the design 0.2; they may differ by 3.0517578125e-05",
                  "correct the one that is wrong", "./taps.h"));
    files.contents["./design.txt"] = "0.25\nhalf\n";
    CHECK(plan_problems(text, files).find("./design.txt:2:1: \"half\" is not one number") == 0);
}

TEST_CASE("coefficient files: a resolved plan keeps the words and reads back as the same", "[config]") {
    const FakeFiles files = files_with("taps.h", header);
    for (const std::string& text :
         {fir_of("taps.h", "file_array = \"belt\"\nfile_fraction_bits = 15\nfile_order = \"oldest-first\"\n"),
          cascade_of("taps.h",
                     "file_array = \"notch\"\nfile_fraction_bits = 14\nfile_feedback = \"added\"\n"
                     "file_layout = \"b0 b1 b2 a1 a2\"\nfile_count = 1\n")}) {
        FakeFiles again = files;
        again.contents["plan.toml"] = text;
        const auto printed = resolved_plan("plan.toml", again);
        REQUIRE(std::holds_alternative<std::string>(printed));
        const std::string& resolved = std::get<std::string>(printed);
        INFO(resolved);
        CHECK(resolved.find("file_array = ") != std::string::npos);
        CHECK(resolved.find("[0.25") == std::string::npos);
        CHECK(response_at(plan_of(resolved, files).filter, 0.1) == response_at(plan_of(text, files).filter, 0.1));
        again.contents["plan.toml"] = resolved;
        CHECK(std::get<std::string>(resolved_plan("plan.toml", again)) == resolved);
    }
}

TEST_CASE("coefficient files: a comment may be in any encoding, a NUL byte is no text", "[config]") {
    const std::string words = "file_fraction_bits = 15\n";
    const std::string latin = "// gegl\xE4ttet\nint16_t h[] = {8192, 16384, 8192};\n";
    CHECK(plan_problems(fir_of("taps.c", words), files_with("taps.c", latin)).empty());
    CHECK(plan_problems(fir_of("taps.c"), files_with("taps.c", latin)).find("what they are worth is not said") !=
          std::string::npos);
    CHECK(plan_problems(fir_of("taps.c", words), files_with("taps.c", "// \xE4\nint16_t h[] = {\xE4};\n"))
              .find("./taps.c:2:16: a number is missing before \"?\"") == 0);
    CHECK(plan_problems(fir_of("taps.c", words), files_with("taps.c", std::string("int16_t h[] = {\0};", 18)))
              .find("./taps.c:1:16: a NUL byte; this is not a text file") == 0);
    CHECK(plan_problems(fir_of("taps.txt"), files_with("taps.txt", "# \xE4\n1\n"))
              .find("./taps.txt:1:3: the byte \\xe4 is not UTF-8") == 0);
    // A byte order mark moves no column.
    CHECK(plan_problems(fir_of("taps.c", words), files_with("taps.c", "\xEF\xBB\xBFint16_t h[] = {Q(1)};\n"))
              .find("./taps.c:1:16: ") == 0);
}

TEST_CASE("coefficient files: only regular files of the root are opened", "[config]") {
    const TemporaryFolder folder;
    const std::string root = folder / "root";
    std::filesystem::create_directories(root + "/fw/folder.h");
    std::ofstream(folder / "secret.h") << "int16_t key[] = {1, 2, 3};\n";
    std::filesystem::create_symlink(folder / "secret.h", root + "/fw/link.h");
    std::ofstream(root + "/fw/empty.h") << "";
    std::ofstream(root + "/fw/large.h") << std::string(largest_named_file_bytes + 1, ' ');
    const auto said = [&](const std::string& path) {
        std::ofstream(root + "/plan.toml") << fir_of(path, "file_fraction_bits = 0\n");
        const auto read = read_plan(root + "/plan.toml", DiskFiles());
        const auto* problems = std::get_if<ReadProblems>(&read);
        return problems == nullptr ? std::string() : joined(*problems);
    };
    CHECK(said("../secret.h").find("taps_file = \"../secret.h\": it lies outside the root") != std::string::npos);
    CHECK(said("fw/link.h").find("outside the root") != std::string::npos);
    CHECK(said("fw/link.h").find("key") == std::string::npos);
    CHECK(said("fw/folder.h").find("it is a folder, not a regular file") != std::string::npos);
    CHECK(said("fw/large.h").find("it has 16777217 bytes, the most allowed are 16777216") != std::string::npos);
    CHECK(said("fw/empty.h").find("fw/empty.h:1:1: there is no array with numbers in the file") != std::string::npos);
    CHECK(said("fw/none.h").find("there is no such file") != std::string::npos);
}
