#include "oracle/filters/equaliser.hpp"

#include <map>

#include "tests/oracle/filters/make.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

const std::map<std::string, std::string> types{{"LPF", "low-pass"},
                                               {"HPF", "high-pass"},
                                               {"BPF skirt gain (peak=Q)", "band-pass-skirt"},
                                               {"BPF 0 dB peak", "band-pass"},
                                               {"APF", "all-pass"},
                                               {"peakingEQ", "peaking"},
                                               {"lowShelf", "low-shelf"},
                                               {"highShelf", "high-shelf"}};

double gain(const FilterStage& stage, double f) { return std::abs(response_at({stage}, f)); }

}  // namespace

TEST_CASE("audio-eq: the published sections (SEEN formulas, COMPUTED, the low-pass also OCTAVE)",
          "[filters][published]") {
    const CsvTable table("rbj-biquads.csv");
    std::size_t compared = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const auto c = [&](const char* name) { return table.number(row, name); };
        const auto type = types.find(table.text(row, "filter"));
        if (type == types.end()) continue;  // the notch is a kind of its own
        ParameterValues values = words({{"type", type->second}, {"frequency_hz", c("f0 [Hz]")}, {"q", c("Q [")}});
        if (table.has(row, "gain [dB]")) values.set("gain_db", c("gain [dB]"));
        const auto made = make_stage("audio-eq", values, {.rate_hz = c("Fs [Hz]")});
        REQUIRE(made);
        const BiquadSection s = section_of(*made);
        INFO(type->second << ", row " << row);
        for (const auto& [value, name] :
             {std::pair{s.b0, "b0"}, {s.b1, "b1"}, {s.b2, "b2"}, {s.a1, "a1"}, {s.a2, "a2"}}) {
            INFO(name);
            CHECK_THAT(value, Catch::WithinAbs(c(name), 4e-15));  // 8.9e-16 was the spread of two programs
        }
        ++compared;
    }
    CHECK(compared == 32);
}

TEST_CASE("audio-eq: bandwidth and slope are the widths that the note defines", "[filters]") {
    const StageContext context{.rate_hz = 48000.0};
    const double f0 = 1000.0 / 48000.0;
    // Band-pass: between the -3 dB points, bandwidth octaves apart; the note's alpha makes them so but for the warp.
    const auto pass =
        make("audio-eq", {{"type", std::string("band-pass")}, {"frequency_hz", 1000.0}, {"bandwidth_octaves", 1.0}},
             context);
    REQUIRE(pass);
    const double low = f0 / std::sqrt(2.0), high = f0 * std::sqrt(2.0);
    CHECK_THAT(gain(*pass, low), Catch::WithinAbs(std::sqrt(0.5), 0.005));
    CHECK_THAT(gain(*pass, high), Catch::WithinAbs(std::sqrt(0.5), 0.005));
    // Peaking: half its gain in dB there.
    const auto peak = make(
        "audio-eq",
        {{"type", std::string("peaking")}, {"frequency_hz", 1000.0}, {"bandwidth_octaves", 1.0}, {"gain_db", 12.0}},
        context);
    REQUIRE(peak);
    CHECK_THAT(20.0 * std::log10(gain(*peak, high)), Catch::WithinAbs(6.0, 0.05));
    // A slope of 1 is a shelf of Q = 1 / sqrt 2.
    const auto slope =
        make("audio-eq",
             {{"type", std::string("low-shelf")}, {"frequency_hz", 1000.0}, {"shelf_slope", 1.0}, {"gain_db", 9.0}},
             context);
    const auto quality =
        make("audio-eq",
             {{"type", std::string("low-shelf")}, {"frequency_hz", 1000.0}, {"q", std::sqrt(0.5)}, {"gain_db", 9.0}},
             context);
    REQUIRE((slope && quality));
    CHECK_THAT(section_of(*slope).b1, Catch::WithinAbs(section_of(*quality).b1, 1e-14));
    CHECK_THAT(section_of(*slope).a2, Catch::WithinAbs(section_of(*quality).a2, 1e-14));
    CHECK_THAT(20.0 * std::log10(gain(*slope, 0.0)), Catch::WithinAbs(9.0, 1e-11));
    CHECK_THAT(20.0 * std::log10(gain(*slope, 0.5)), Catch::WithinAbs(0.0, 1e-11));
}

TEST_CASE("audio-eq: a boost followed by the same cut is the identity", "[filters]") {
    for (const char* type : {"peaking", "low-shelf", "high-shelf"}) {
        const auto section = [&](double gain_db) {
            return *make("audio-eq",
                         {{"type", std::string(type)}, {"frequency_hz", 0.07}, {"q", 0.9}, {"gain_db", gain_db}});
        };
        for (const double f : {0.0, 0.03, 0.07, 0.2, 0.5}) {
            CHECK(std::abs(response_at({section(8.0), section(-8.0)}, f) - 1.0) < 1e-13);
        }
    }
}

TEST_CASE("audio-eq: the steepest slope is the last for which alpha is real", "[filters]") {
    // (A + 1/A)(1/S - 1) + 2 = 0 at 20 dB: A = 10^0.5, A + 1/A = 3.47851, S = 1 / (1 - 2 / 3.47851) = 2.35272.
    CHECK_THAT(steepest_slope(20.0), Catch::WithinAbs(2.35272, 5e-6));
    CHECK(steepest_slope(0.0) == no_limit);
    const auto given = [](double slope) {
        return refusal(
            "audio-eq",
            {{"type", std::string("high-shelf")}, {"frequency_hz", 100.0}, {"shelf_slope", slope}, {"gain_db", 20.0}},
            {.rate_hz = 1000.0});
    };
    CHECK(given(2.3527) == "accepted");
    CHECK(given(2.3529) ==
          "shelf_slope: a shelf of 20 dB cannot have a slope of 2.3529\n"
          "  give 2.3527 or less; up to 1 it is monotonic");
}

TEST_CASE("audio-eq: what does not go together is refused", "[filters]") {
    const auto given = [](std::initializer_list<Given> list) { return refusal("audio-eq", list, {.rate_hz = 1000.0}); };
    const std::string peaking = "peaking", low = "low-pass";
    CHECK(given({{"type", peaking}, {"frequency_hz", 100.0}, {"gain_db", 3.0}}) ==
          "q: q, bandwidth_octaves or shelf_slope is missing\n  give one of them");
    CHECK(given({{"type", peaking}, {"frequency_hz", 100.0}, {"q", 1.0}, {"shelf_slope", 1.0}, {"gain_db", 3.0}}) ==
          "shelf_slope: q, bandwidth_octaves or shelf_slope: more than one is given\n  keep one of them");
    CHECK(given({{"type", peaking}, {"frequency_hz", 100.0}, {"q", 1.0}}) ==
          "gain_db: gain_db is missing\n  give the gain that type = \"peaking\" has");
    CHECK(given({{"type", low}, {"frequency_hz", 100.0}, {"q", 1.0}, {"gain_db", 3.0}}) ==
          "gain_db: type = \"low-pass\" has no gain_db\n  leave gain_db out");
    CHECK(given({{"type", low}, {"frequency_hz", 100.0}, {"bandwidth_octaves", 1.0}}) ==
          "bandwidth_octaves: type = \"low-pass\" has no bandwidth\n  give q instead");
    CHECK(given({{"type", peaking}, {"frequency_hz", 100.0}, {"shelf_slope", 1.0}, {"gain_db", 3.0}}) ==
          "shelf_slope: type = \"peaking\" has no slope\n  give q instead");
    CHECK(given({{"type", low}, {"frequency_hz", 500.0}, {"q", 1.0}}) ==
          "frequency_hz: 500 Hz is not below half the sample rate, 500 Hz\n  give less than 500 Hz");
    CHECK(given({{"type", low}, {"frequency_hz", 0.001}, {"q", 1.0}}) ==
          "frequency_hz: a section at 0.001 Hz at 1000 samples a second can lose 4.9e-06 of its gain in double "
          "precision\n"
          "  give 0.00905 Hz or more, or a wider section");
    CHECK(given({{"type", low}, {"frequency_hz", 0.00905}, {"q", 1.0}}) == "accepted");
    CHECK(given({{"type", low}, {"frequency_hz", 499.9999}, {"q", 1e4}}) ==
          "frequency_hz: a section at 499.9999 Hz at 1000 samples a second cannot be held in double precision\n"
          "  give 499.158 Hz or less, or a wider section");
    CHECK(given({{"type", low}, {"frequency_hz", 499.158}, {"q", 1e4}}) == "accepted");
}
