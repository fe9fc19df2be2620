#include "oracle/measure/tone.hpp"

#include <limits>
#include <numbers>

#include "tests/oracle/measure/gaussian.hpp"
#include "tests/oracle/support.hpp"
#include "tests/published/csv_table.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

constexpr double pi = std::numbers::pi;

struct Part {
    double f, amplitude, phase;
};

std::vector<double> sum_of(std::size_t samples, const std::vector<Part>& parts) {
    std::vector<double> record(samples, 0.0);
    for (const Part& part : parts) {
        for (std::size_t n = 0; n < samples; ++n) {
            const long double turns = static_cast<long double>(part.f) * static_cast<long double>(n);
            record[n] +=
                part.amplitude * std::cos(static_cast<double>(turns - std::floor(turns)) * 2.0 * pi + part.phase);
        }
    }
    return record;
}

ToneQuestion question(double f, int highest = 10) {
    ToneQuestion asked;
    asked.cycles_per_sample = f;
    asked.highest_harmonic = highest;
    return asked;
}

ToneFigures figures_of(const ToneQuestion& asked, const std::vector<double>& record) {
    const ToneAnswer answer = measure_tone(asked, record);
    INFO(reason_of(answer.fault));
    REQUIRE(answer.figures);
    return *answer.figures;
}

double decibels(double amplitude_ratio) { return 20.0 * std::log10(amplitude_ratio); }

void add_noise(std::vector<double>& record, double rms, Gaussian& noise) {
    for (double& sample : record) sample += rms * noise.next();
}

constexpr double odd_tone = 1021.0 / 65536.0;      // coherent: no common factor, so 65536 different phases
constexpr double stray_tone = 0.0772135954999579;  // no whole number of cycles in any record

}  // namespace

// COMPUTED (NumPy): check-values 7.1. The simulated column has four digits after the point.
TEST_CASE("tone: an ideal quantiser gives the simulated SINAD of the table", "[oracle][published]") {
    const CsvTable table("ideal-sqnr.csv");
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double bits = table.number(row, "bits");
        if (!table.has(row, "simulated") || bits > 16.0) continue;
        const double amplitude = std::exp2(bits - 1.0) - 1.0;
        auto record = sum_of(65536, {{odd_tone, amplitude, 0.1234 - 0.5 * pi}});
        for (double& sample : record) sample = std::nearbyint(sample);
        const auto figures = figures_of(question(odd_tone), record);
        INFO(bits << " bits");
        // Half a digit of the table; a phase's last bit can move a sample over a tie: 1/65536 of the noise.
        CHECK(figures.sinad_db->value == Approx(table.number(row, "simulated")).margin(1e-4).epsilon(0));
    }
}

// Formula SEEN (MT-001, MT-229), values COMPUTED.
TEST_CASE("tone: ideal quantisers of 8, 10, 12 and 16 bits have 6.02 N + 1.76 dB", "[oracle][published]") {
    const CsvTable table("ideal-sqnr.csv");
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double bits = table.number(row, "bits");
        if (bits != 8.0 && bits != 10.0 && bits != 12.0 && bits != 16.0) continue;
        const double full_scale = std::exp2(bits - 1.0);
        // A stray frequency, amplitude full scale less half a step: all codes, none clipped.
        const double amplitude = full_scale - 0.5;
        for (const double f : {odd_tone, stray_tone}) {
            auto record = sum_of(65536, {{f, amplitude, 0.1234}});
            for (double& sample : record) sample = std::nearbyint(sample);
            ToneQuestion asked = question(f);
            asked.full_scale = full_scale;
            const auto figures = figures_of(asked, record);
            INFO(bits << " bits at " << f);
            const double ideal = table.number(row, "6.0206N") + decibels(amplitude / full_scale);
            // The error's variance leaves 1/12 by the slow stretch at each crest, where the error is not uniform:
            // its share of the period is about sqrt(step / 2 amplitude) * 2 / pi, a part of order 1 of it counts
            // (Bennett 1948); so 10 lg(1 + that), and four standard deviations of the model's chance, sqrt(2 / N).
            const double crest = 2.0 / pi * std::sqrt(0.5 / amplitude), chance = 4.0 * std::sqrt(2.0 / 65536.0);
            const double band = 10.0 * std::log10(1.0 + crest + chance);
            CHECK(figures.sinad_db->value == Approx(ideal).margin(band).epsilon(0));
            CHECK(figures.enob_bits->value == Approx(bits).margin(band / 6.02).epsilon(0));
            // Both formulas are one when the level is taken into account.
            CHECK(figures.enob_of_sinad_bits->value - std::log2(figures.fundamental.amplitude.value / full_scale) ==
                  Approx(figures.enob_bits->value).margin(1e-12).epsilon(0));
        }
    }
}

// COMPUTED (NumPy), OCTAVE.
TEST_CASE("tone: SINAD and both ENOB of the sine-fit examples", "[oracle][published]") {
    const CsvTable expected("sinefit-expected.csv");
    for (const std::size_t row : {0u, 1u, 2u, 3u}) {
        const CsvTable codes(row == 0 ? "sinefit-example-a.csv" : "sinefit-example-b.csv");
        std::vector<double> record;
        for (std::size_t n = 0; n < codes.rows(); ++n) record.push_back(codes.number(n, "y [codes]"));
        ToneQuestion asked = question(row == 3 ? 0.094 : expected.number(row, "f ["), 3);
        asked.fits_frequency = row == 3;
        asked.full_scale = 2048.0;
        const auto figures = figures_of(asked, record);
        INFO("row " << row);
        // The rms is good to 1e-12 of 0.3 (sine_fit_test): 3e-11 dB.
        CHECK(figures.sinad_db->value == Approx(expected.number(row, "SINAD")).margin(1e-9).epsilon(0));
        CHECK(figures.enob_of_sinad_bits->value == Approx(expected.number(row, "ENOB from")).margin(1e-9).epsilon(0));
        CHECK(figures.enob_bits->value == Approx(expected.number(row, "ENOB = 12")).margin(1e-9).epsilon(0));
    }
}

TEST_CASE("tone: known harmonics give their THD, coherent or not", "[oracle]") {
    for (const std::size_t length : {4096u, 10'007u}) {
        for (const double f : {129.0 / static_cast<double>(length), stray_tone}) {
            const auto record =
                sum_of(length, {{f, 0.8, 0.3}, {2.0 * f, 0.008, 1.0}, {3.0 * f, 0.006, -2.0}, {0.0, 0.2, 0.0}});
            const auto figures = figures_of(question(f), record);
            // Without noise the joint fit is exact: 1e-13 of the fundamental, so 1e-11 of a harmonic 40 dB down.
            CHECK(figures.thd_percent->value == Approx(1.25).margin(1e-9).epsilon(0));
            CHECK(figures.thd_db->value == Approx(decibels(0.0125)).margin(1e-9).epsilon(0));
            CHECK(figures.harmonics[0].mean_square.value == Approx(0.5 * 0.008 * 0.008).epsilon(1e-9));
            CHECK(figures.harmonics[1].mean_square.value == Approx(0.5 * 0.006 * 0.006).epsilon(1e-9));
            // The three-parameter fit takes up at most 1 / (pi bins) of a harmonic's amplitude, bins >= 100.
            CHECK(figures.sinad_db->value == Approx(-decibels(0.0125)).margin(0.05).epsilon(0));
            // The second is the largest line. The third's side lobe is 92 dB below it: 2e-4 dB.
            CHECK(figures.sfdr_db->value == Approx(decibels(100.0)).margin(3e-4).epsilon(0));
            CHECK(figures.spur_cycles_per_sample == Approx(2.0 * f).margin(1e-3 / static_cast<double>(length)));
            CHECK(figures.spur_is_line);
        }
    }
}

TEST_CASE("tone: harmonics that fold are told and not counted twice", "[oracle]") {
    // One fifth: 2 and 3 fall on 2/5, 4 and 6 on the fundamental, 5 and 10 on 0.
    const auto fifth = folded_harmonics(0.2, 10, 1000);
    REQUIRE(fifth.size() == 9);
    CHECK(fifth[0].place == HarmonicPlace::own);
    CHECK(fifth[1].place == HarmonicPlace::on_earlier);
    CHECK(fifth[1].shares_with == 2);
    CHECK(fifth[2].place == HarmonicPlace::on_fundamental);
    CHECK(fifth[3].place == HarmonicPlace::on_offset);
    CHECK(fifth[4].place == HarmonicPlace::on_fundamental);
    CHECK(fifth[8].place == HarmonicPlace::on_offset);
    CHECK(fifth[0].cycles_per_sample == Approx(0.4));
    // A third harmonic of 1 % stands where the second would: counted once.
    const auto record = sum_of(1000, {{0.2, 1.0, 0.3}, {0.6, 0.01, 1.0}});
    CHECK(figures_of(question(0.2), record).thd_percent->value == Approx(1.0).margin(1e-9).epsilon(0));

    // A quarter: 2 at half the rate, 3 on the fundamental, 4 on 0. Odd and even lengths have different columns.
    for (const std::size_t length : {999u, 1000u}) {
        auto quarter = sum_of(length, {{0.25, 1.0, 0.3}});
        for (std::size_t n = 0; n < length; ++n) quarter[n] += n % 2 == 0 ? 0.01 : -0.01;
        const auto figures = figures_of(question(0.25), quarter);
        CHECK(figures.harmonics[0].cycles_per_sample == 0.5);
        CHECK(figures.harmonics[1].place == HarmonicPlace::on_fundamental);
        CHECK(figures.harmonics[2].place == HarmonicPlace::on_offset);
        // The alternating sequence has its amplitude as rms: power 1e-4 against 1/2.
        CHECK(figures.harmonics[0].mean_square.value == Approx(1e-4).epsilon(1e-9));
        CHECK(figures.thd_percent->value == Approx(100.0 * std::sqrt(2e-4)).epsilon(1e-9));
        CHECK(figures.spur_cycles_per_sample == Approx(0.5).margin(1.0 / static_cast<double>(length)));
        if (length % 2 == 0) CHECK(figures.sfdr_db->value == Approx(10.0 * std::log10(0.5e4)).margin(1e-3).epsilon(0));
    }

    // Nearer to half the rate than half a bin is at half the rate: its two columns would be one.
    CHECK(folded_harmonics(0.25 - 1e-5, 2, 1000)[0].cycles_per_sample == 0.5);
    CHECK(folded_harmonics(0.25 - 3e-4, 2, 1000)[0].cycles_per_sample == Approx(0.5 - 6e-4).epsilon(1e-12));

    // No harmonic has a place: no THD.
    CHECK(!figures_of(question(0.25, 1), sum_of(128, {{0.25, 1.0, 0.3}, {0.1, 0.1, 0.0}})).thd_db);
}

TEST_CASE("tone: a spur between the bins is found with its level", "[oracle]") {
    Random random(11);
    for (int round = 0; round < 50; ++round) {
        const std::size_t length = 2000 + static_cast<std::size_t>(random.whole(0, 3000));
        const double spur = random.between(0.3, 0.45);
        const auto figures =
            figures_of(question(0.1234567), sum_of(length, {{0.1234567, 1.0, 0.2}, {spur, 1e-4, random.ratio() * pi}}));
        // The image is 400 bins off or more: 92 dB down and a side lobe's 6 dB an octave (4 to 400 bins: 40 dB), so
        // 3e-7 of the level. Three parabolas leave less than 1e-4 of a bin.
        CHECK(figures.sfdr_db->value == Approx(80.0).margin(1e-5).epsilon(0));
        CHECK(figures.spur_cycles_per_sample == Approx(spur).margin(1e-4 / static_cast<double>(length)).epsilon(0));
        CHECK(figures.spur_is_line);
    }
    // Within four bins of the fundamental nothing is seen, beyond it is.
    const double bin = 1.0 / 4096.0;
    const auto near = figures_of(question(0.25, 1), sum_of(4096, {{0.25, 1.0, 0.2}, {0.25 + 3 * bin, 1e-3, 0.0}})),
               far = figures_of(question(0.25, 1), sum_of(4096, {{0.25, 1.0, 0.2}, {0.25 + 6 * bin, 1e-3, 0.0}}));
    CHECK(std::abs(near.spur_cycles_per_sample - (0.25 + 3 * bin)) > 0.9 * bin);
    CHECK(far.spur_cycles_per_sample == Approx(0.25 + 6 * bin).margin(0.01 * bin).epsilon(0));
    CHECK(far.sfdr_db->value == Approx(60.0).margin(1e-3).epsilon(0));
}

TEST_CASE("tone: noise alone is no line, and its THD is said", "[oracle]") {
    int lines = 0;
    double thd_square = 0.0, said_square = 0.0, sfdr = 0.0, sfdr_square = 0.0, sfdr_said_square = 0.0;
    const int rounds = test::rounds_of(500);
    Gaussian noise(3);
    for (int round = 0; round < rounds; ++round) {
        auto record = sum_of(512, {{stray_tone, 1.0, 0.1}});
        add_noise(record, 0.01, noise);
        const auto figures = figures_of(question(stray_tone), record);
        lines += figures.spur_is_line;
        const double db = figures.sfdr_db->value, u = figures.sfdr_db->standard_uncertainty;
        sfdr += db / rounds, sfdr_square += db * db / rounds, sfdr_said_square += u * u / rounds;
        // Without a harmonic its power is exponential, whose deviation is its mean; so it is said where the power is
        // below that, and no larger power is surer.
        for (const Harmonic& harmonic : figures.harmonics) {
            const double mean = harmonic.noise_mean_square, said = harmonic.mean_square.standard_uncertainty;
            CHECK((harmonic.mean_square.value < mean ? std::abs(said - mean) < 1e-9 * mean : said > 0.99 * mean));
        }
        thd_square += figures.thd_percent->value * figures.thd_percent->value / rounds;
        said_square += figures.thd_of_noise_percent * figures.thd_of_noise_percent / rounds;
    }
    // Less than one of a thousand: five of 500 would come once in 10^4.
    CHECK(lines < 5);
    // The largest of the noise spreads as said. The window's bins overlap and there are not infinitely many: over
    // 2,000 records 5 % less than said. Gumbel's kurtosis is 5.4: the deviation is sure to sqrt(4.4 / (4 rounds)).
    const double spread = std::sqrt(sfdr_square - sfdr * sfdr);
    CHECK(std::sqrt(sfdr_said_square) / spread == Approx(1.05).margin(4.0 * std::sqrt(1.1 / rounds)).epsilon(0));
    // Sums of 18 squares each round: relative deviation sqrt(2 / (18 rounds)), four of them.
    CHECK(thd_square == Approx(said_square).epsilon(4.0 * std::sqrt(2.0 / (18.0 * rounds))));
}

TEST_CASE("tone: 95 % intervals hold SINAD, ENOB, THD and SFDR", "[oracle]") {
    const int rounds = test::rounds_of(2000);
    constexpr double rms = 0.002, second = 0.01, third = 0.007;
    // Over this many samples the leak of a harmonic into the fit of three parameters is 1 / (pi 40): the truth
    // of SINAD is that of a coherent record.
    constexpr std::size_t length = 512;
    constexpr double f = 41.0 / 512.0;
    int sinad = 0, enob = 0, thd = 0, sfdr = 0, plain = 0;
    Gaussian noise(123);
    for (int round = 0; round < rounds; ++round) {
        auto record = sum_of(length, {{f, 1.0, 0.3}, {2 * f, second, 1.0}, {3 * f, third, 2.0}});
        auto without = sum_of(length, {{f, 1.0, 0.3}});
        add_noise(record, rms, noise);
        add_noise(without, rms, noise);
        ToneQuestion asked = question(f, 3);
        asked.full_scale = 1.0;
        const auto figures = figures_of(asked, record), bare = figures_of(asked, without);
        // The mean of NAD: harmonics and noise, the latter less the three degrees that the fit takes.
        const double freedom = static_cast<double>(length - 3) / static_cast<double>(length);
        const double nad = 0.5 * (second * second + third * third) + rms * rms * freedom;
        const double bare_nad = rms * rms * freedom;
        sinad += holds(figures.sinad_db->value, figures.sinad_db->standard_uncertainty, -10 * std::log10(2 * nad));
        plain += holds(bare.sinad_db->value, bare.sinad_db->standard_uncertainty, -10 * std::log10(2 * bare_nad));
        enob += holds(bare.enob_bits->value, bare.enob_bits->standard_uncertainty,
                      std::log2(2.0 / std::sqrt(12.0 * bare_nad)));
        thd += holds(figures.thd_db->value, figures.thd_db->standard_uncertainty, decibels(std::hypot(second, third)));
        CHECK(figures.thd_percent->standard_uncertainty ==
              Approx(figures.thd_percent->value * std::log(10.0) / 20.0 * figures.thd_db->standard_uncertainty));
        sfdr += holds(figures.sfdr_db->value, figures.sfdr_db->standard_uncertainty, decibels(1.0 / second));
    }
    for (const int held : {sinad, enob, thd, sfdr, plain}) CHECK(holds_95_percent(held, rounds));
}

TEST_CASE("tone: any split into blocks gives the same figures", "[oracle]") {
    auto record = sum_of(5000, {{stray_tone, 0.9, 0.3}, {2 * stray_tone, 0.001, 0.0}});
    Gaussian noise(9);
    add_noise(record, 1e-4, noise);
    const auto whole = figures_of(question(stray_tone), record);
    for (const std::size_t block : {1u, 97u, 4999u}) {
        ToneMeasure measure(question(stray_tone));
        for (std::size_t first = 0; first < record.size(); first += block) {
            measure.add(std::span(record).subspan(first, std::min(block, record.size() - first)));
        }
        const auto split = measure.value();
        REQUIRE(split.figures);
        CHECK(split.figures->sinad_db->value == whole.sinad_db->value);
        CHECK(split.figures->thd_db->value == whole.thd_db->value);
        CHECK(split.figures->sfdr_db->value == whole.sfdr_db->value);
    }
}

TEST_CASE("tone: what cannot be judged has a reason", "[oracle]") {
    auto record = sum_of(256, {{0.1, 1.0, 0.0}});
    const auto fault = [](double f, std::span<const double> samples) {
        return measure_tone(question(f), samples).fault;
    };
    CHECK(fault(0.1, std::span(record).first(tone_least_samples - 1)) == ToneFault::too_short);
    CHECK(fault(0.1, std::span(record).first(tone_least_samples)) == ToneFault::none);
    CHECK(fault(0.001, record) == ToneFault::near_an_end);
    CHECK(fault(0.1, std::vector<double>(256, 0.0)) == ToneFault::no_tone);
    CHECK(fault(0.1, std::vector<double>(256, 0.7)) == ToneFault::no_tone);
    // A tone elsewhere is none here, be it where a harmonic would fold (three times 0.3) or not.
    CHECK(fault(0.3, record) == ToneFault::no_tone);
    CHECK(fault(0.2345, record) == ToneFault::no_tone);
    Gaussian noise(4);
    std::vector<double> only_noise(256, 0.0);
    add_noise(only_noise, 1.0, noise);
    CHECK(fault(0.1, only_noise) == ToneFault::no_tone);
    record[255] = std::nan("");
    CHECK(fault(0.1, record) == ToneFault::not_finite);

    ToneMeasure measure(question(0.1));
    const std::vector<double> block(tone_most_samples / 2 + 1, 0.5);
    measure.add(block);
    measure.add(block);
    CHECK(measure.value().fault == ToneFault::too_long);
}

TEST_CASE("tone: a perfect sine has no SINAD, and says so", "[oracle]") {
    const auto figures = figures_of(question(stray_tone), sum_of(4096, {{stray_tone, 0.9, 0.3}}));
    CHECK(figures.is_perfect);
    CHECK(!figures.sinad_db);
    CHECK(!figures.sfdr_db);
    CHECK(figures.fundamental.amplitude.value == Approx(0.9).epsilon(1e-14));
}
