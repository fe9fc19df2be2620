#include "oracle/filters/octave_band.hpp"

#include <limits>

#include "tests/oracle/filters/make.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Limit {
    double ratio, least_db, most_db;  ///< of f to the midband; relative attenuation
};

// Class 1 of the 2014 edition for bands of 1/fraction octave: formula 9 moves the breakpoints of the octave.
std::vector<Limit> class_1(int fraction) {
    const CsvTable table("iec61260-1-masks.csv");
    const double g = std::pow(10.0, 0.3);
    std::vector<Limit> limits;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double octave = table.number(row, "octave Omega");
        const double scale = (std::pow(g, 0.5 / fraction) - 1.0) / (std::sqrt(g) - 1.0);
        limits.push_back({1.0 + scale * (octave - 1.0), table.number(row, "2014 class 1 min"),
                          table.number(row, "2014 class 1 max")});
    }
    return limits;
}

double attenuation_db(const FilterChain& chain, double cycles) {
    return -20.0 * std::log10(std::abs(response_at(chain, cycles)));
}

// Room to the mask at 41 points between any two breakpoints, linear in lg of the ratio, on both sides of the midband.
double room_db(int fraction, int order, double midband_hz, double rate_hz) {
    const auto made =
        make("octave-band", {{"fraction", whole(fraction)}, {"midband_hz", midband_hz}, {"order", whole(order)}},
             {.rate_hz = rate_hz});
    REQUIRE(made);
    const double middle = band_of(fraction, midband_hz)->midband_hz / rate_hz;
    const auto limits = class_1(fraction);
    double room = std::numeric_limits<double>::infinity();
    for (std::size_t i = 1; i < limits.size(); ++i) {
        const Limit &from = limits[i - 1], &to = limits[i];
        if (from.ratio == to.ratio) continue;
        for (int step = 0; step <= 40; ++step) {
            const double share = step / 40.0, ratio = from.ratio * std::pow(to.ratio / from.ratio, share);
            const double least = from.least_db + share * (to.least_db - from.least_db);
            const double most =
                std::isinf(from.most_db) ? from.most_db : from.most_db + share * (to.most_db - from.most_db);
            for (const double f : {middle * ratio, middle / ratio}) {
                if (!(f < 0.5)) continue;
                const double attenuation = attenuation_db({*made}, f);
                // Just inside and just outside an edge stand at the same frequency, on either side of -3.01 dB.
                room = std::min({room, attenuation - least, most - attenuation});
            }
        }
    }
    return room;
}

}  // namespace

TEST_CASE("octave band: exact mid-bands and edges (formulas SEEN-2, COMPUTED)", "[filters][published]") {
    const CsvTable table("iec61260-band-frequencies.csv");
    std::size_t octaves = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const int index = static_cast<int>(table.number(row, "index x"));
        const OctaveBand third = octave_band(3, index);
        INFO("x " << index);
        // The table raised G to a power by the C library: some ulps.
        CHECK_THAT(third.midband_hz, Catch::WithinRel(table.number(row, "exact mid-band, third"), 3e-15));
        CHECK_THAT(third.lower_hz, Catch::WithinRel(table.number(row, "third-octave lower"), 3e-15));
        CHECK_THAT(third.upper_hz, Catch::WithinRel(table.number(row, "third-octave upper"), 3e-15));
        CHECK(third.upper_hz == octave_band(3, index + 1).lower_hz);
        if (!table.has(row, "octave lower")) continue;
        const OctaveBand octave = octave_band(1, index);
        CHECK_THAT(octave.midband_hz, Catch::WithinRel(table.number(row, "exact mid-band, octave"), 3e-15));
        CHECK_THAT(octave.lower_hz, Catch::WithinRel(table.number(row, "octave lower"), 3e-15));
        CHECK_THAT(octave.upper_hz, Catch::WithinRel(table.number(row, "octave upper"), 3e-15));
        ++octaves;
    }
    CHECK(octaves == 11);
    CHECK(octave_band(3, -10).midband_hz == 100.0);
    CHECK(octave_band(3, 10).midband_hz == 10000.0);
    // Even fractions have 1 kHz at an edge.
    CHECK(octave_band(2, 0).lower_hz == 1000.0);
}

TEST_CASE("octave band: nominal mid-bands stand for the exact ones", "[filters]") {
    // The preferred numbers of ISO 266 (from memory).
    const double nominal[] = {25,   31.5, 40,   50,   63,   80,   100,   125,   160,   200,
                              250,  315,  400,  500,  630,  800,  1000,  1250,  1600,  2000,
                              2500, 3150, 4000, 5000, 6300, 8000, 10000, 12500, 16000, 20000};
    int index = -16;
    for (const double hz : nominal) {
        INFO(hz << " Hz");
        const auto band = band_of(3, hz);
        REQUIRE(band);
        CHECK(band->index == index++);
        CHECK(band_of(3, band->midband_hz)->index == band->index);
    }
    for (int fraction = 1; fraction <= 24; ++fraction) {
        for (int x = -40; x <= 40; ++x) {
            const OctaveBand exact = octave_band(fraction, x);
            CHECK(band_of(fraction, exact.midband_hz)->index == x);
            CHECK(band_of(fraction, 1.0119 * exact.midband_hz)->index == x);
            CHECK_FALSE(band_of(fraction, 1.0121 * exact.midband_hz));
        }
    }
}

TEST_CASE("octave band: -3.01 dB at the exact edges, whatever the band and the rate", "[filters]") {
    for (const int fraction : {1, 3, 12}) {
        for (const double rate_hz : {4000.0, 48000.0}) {
            for (const int order : {1, 3, 4, 6}) {
                const OctaveBand band = *band_of(fraction, octave_band(fraction, 0).midband_hz);
                const FilterChain chain{stage(BiquadCascade{octave_band_sections(band, order, rate_hz)})};
                INFO(fraction << ' ' << rate_hz << ' ' << order);
                // The twelfth at 48 kHz has poles 0.0004 from the circle and its angle: 2e-16 / (0.0004 x 0.13).
                CHECK_THAT(attenuation_db(chain, band.lower_hz / rate_hz), Catch::WithinAbs(3.010299957, 1e-9));
                CHECK_THAT(attenuation_db(chain, band.upper_hz / rate_hz), Catch::WithinAbs(3.010299957, 1e-9));
            }
        }
    }
}

TEST_CASE("octave band: class 1 of IEC 61260-1 from order 3 at 6 midbands a second, order 4 elsewhere (SEEN-2)",
          "[filters][published]") {
    for (const int fraction : {1, 3, 6, 12, 24}) {
        const double midband_hz = octave_band(fraction, 0).midband_hz;
        for (const double samples : {6.0, 8.0, 20.0, 100.0}) {
            INFO("1/" << fraction << " octave, " << samples << " samples a midband");
            CHECK(room_db(fraction, 3, midband_hz, samples * midband_hz) >= 0.0);
            CHECK(room_db(fraction, 4, midband_hz, samples * midband_hz) >= 0.0);
        }
        CHECK(room_db(fraction, 4, midband_hz, 2.9 * midband_hz) >= 0.0);
        CHECK(room_db(fraction, 2, midband_hz, 20.0 * midband_hz) < 0.0);
    }
    // The other side: an octave of order 3 loses its lower skirt to the warp.
    CHECK(room_db(1, 3, 1000.0, 5500.0) < 0.0);
    // Sound-level meters at 48 kHz, all the octaves from 31.5 Hz to 16 kHz and thirds from 25 Hz to 20 kHz.
    for (int x = -5; x <= 4; ++x) CHECK(room_db(1, 4, octave_band(1, x).midband_hz, 48000.0) >= 0.0);
    for (int x = -16; x <= 13; ++x) CHECK(room_db(3, 4, octave_band(3, x).midband_hz, 48000.0) >= 0.0);
}

TEST_CASE("octave band: the mask is what the table of third octaves prints (SEEN-2)", "[filters][published]") {
    const double printed[] = {1.0, 1.02667, 1.05575, 1.08746, 1.12202, 1.12202, 1.29437, 1.88173, 3.05365, 5.39195};
    const auto limits = class_1(3);
    REQUIRE(limits.size() == 10);
    for (std::size_t i = 0; i < 10; ++i) CHECK_THAT(limits[i].ratio, Catch::WithinAbs(printed[i], 5.1e-6));
}

TEST_CASE("octave band: what is no band, or does not fit the rate, is refused", "[filters]") {
    const auto given = [](int fraction, double midband_hz, double rate_hz, int order = 3) {
        return refusal("octave-band",
                       {{"fraction", whole(fraction)}, {"midband_hz", midband_hz}, {"order", whole(order)}},
                       {.rate_hz = rate_hz});
    };
    CHECK(given(3, 1100.0, 48000.0) ==
          "midband_hz: 1100 Hz is not the middle of a band of 1/3 octave\n"
          "  the nearest are 1000 Hz and 1258.93 Hz");
    CHECK(given(1, 1400.0, 48000.0) ==
          "midband_hz: 1400 Hz is not the middle of an octave band\n"
          "  the nearest are 1000 Hz and 1995.26 Hz");
    CHECK(given(1, 16000.0, 44100.0) ==
          "midband_hz: the upper edge of this band, 22387.2 Hz, is not below half the sample rate, 22050 Hz\n"
          "  give 7943.28 Hz or less, or a rate_hz of 44800 or more");
    CHECK(given(1, 16000.0, 44800.0) == "accepted");
    CHECK(given(1, 7943.28, 44100.0) == "accepted");
    CHECK(given(3, 1.0, 48000.0) ==
          "midband_hz: a band of 1/3 octave at 1 Hz at 48000 samples a second can lose 2.2e-07 "
          "of its gain in double precision\n"
          "  give 1.99526 Hz or more, or a lower rate_hz or order");
    CHECK(given(3, 1.99526, 48000.0) == "accepted");
    CHECK(given(25, 1000.0, 48000.0) == "fraction: 25 is above the largest, 24\n  give 24 or less");
    CHECK(given(24, 985.712, 1e7, 12) ==
          "midband_hz: a band of 1/24 octave at 985.712 Hz at 10000000 samples a second can lose 4.6e-07 of its "
          "gain in double precision\n  give 2778.11 Hz or more, or a lower rate_hz or order");
}
