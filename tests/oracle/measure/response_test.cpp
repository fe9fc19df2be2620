#include "oracle/measure/response.hpp"

#include <functional>
#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

constexpr double pi = 3.14159265358979323846;
using Complex = std::complex<double>;

// The rooms under test see no filters: a section of our own, and its response.
std::vector<double> filtered(const BiquadSection& s, const std::vector<double>& in) {
    std::vector<double> out(in.size());
    long double x1 = 0, x2 = 0, y1 = 0, y2 = 0;
    for (std::size_t n = 0; n < in.size(); ++n) {
        const long double x = in[n], y = s.b0 * x + s.b1 * x1 + s.b2 * x2 - s.a1 * y1 - s.a2 * y2;
        x2 = x1, x1 = x, y2 = y1, y1 = y;
        out[n] = static_cast<double>(y);
    }
    return out;
}

Complex response(const BiquadSection& s, double f) {
    const Complex z = std::polar(1.0, -2.0 * pi * f);
    return (s.b0 + (s.b1 + s.b2 * z) * z) / (1.0 + (s.a1 + s.a2 * z) * z);
}

// A NaN is larger than anything.
void keep_larger(double& largest, double value) {
    if (!(value <= largest)) largest = value;
}

std::vector<double> difference_of(const std::vector<double>& a, const std::vector<double>& b) {
    std::vector<double> difference(a.size());
    for (std::size_t n = 0; n < a.size(); ++n) difference[n] = a[n] - b[n];
    return difference;
}

std::vector<double> rounded_to_q15(std::vector<double> samples) {
    for (double& sample : samples) sample = std::floor(sample * 32768.0 + 0.5) / 32768.0;
    return samples;
}

std::vector<double> quantised_noise(std::size_t length, std::uint64_t seed) {
    auto samples = noise(length, seed);
    for (double& sample : samples) sample *= 0.9;
    return rounded_to_q15(std::move(samples));
}

std::vector<double> chirp(std::size_t length, double from, double to) {
    std::vector<double> samples(length);
    for (std::size_t n = 0; n < length; ++n) {
        const double t = static_cast<double>(n),
                     turns = from * t + 0.5 * (to - from) * t * t / static_cast<double>(length);
        samples[n] = 0.9 * std::sin(2.0 * pi * std::fmod(turns, 1.0));
    }
    return rounded_to_q15(std::move(samples));
}

std::vector<double> multitone(std::size_t length, const std::vector<double>& tones) {
    std::vector<double> samples(length);
    for (std::size_t n = 0; n < length; ++n) {
        for (std::size_t i = 0; i < tones.size(); ++i) {
            const double turns = std::fmod(tones[i] * static_cast<double>(n), 1.0) + 0.37 * static_cast<double>(i * i);
            samples[n] += 0.9 / static_cast<double>(tones.size()) * std::sin(2.0 * pi * turns);
        }
    }
    return rounded_to_q15(std::move(samples));
}

std::vector<ResponsePoint> points_of(ResponseMeasure& measure, std::span<const double> stimulus,
                                     std::span<const double> error) {
    measure.add(stimulus, error);
    measure.finish();
    return measure.value();
}

// A 50 Hz notch at a rate of 1000 Hz, and a low-pass at 0.004 of the rate.
const BiquadSection notch = cookbook(Shape::notch, 0.05, 5.0);
const BiquadSection low_pass = cookbook(Shape::low_pass, 0.004, 0.7);

const std::vector<double> tones_of_test{0.0101, 0.03, 0.05, 0.0703, 0.11, 0.2, 0.31, 0.45};

}  // namespace

TEST_CASE("response: a right filter with rounded output is within 1e-5 of the truth after 1e6 samples", "[measure]") {
    const BiquadSection section = GENERATE(notch, low_pass);
    const std::uint64_t seed = 1001;
    INFO("seed " << seed);
    const std::size_t length = 1000000;
    const auto check = [&](ResponseMeasure& measure, const std::vector<double>& x, double from, double to,
                           bool x_is_chirp) {
        const auto design = filtered(section, x), board = rounded_to_q15(design);
        double worst = 0.0;
        for (const ResponsePoint& point : points_of(measure, x, difference_of(board, design))) {
            if (point.cycles_per_sample < from || point.cycles_per_sample > to) continue;
            const Complex ideal = response(section, point.cycles_per_sample);
            // A lone tone of 0.9 whose output stays under half an LSB rounds to silence: there the board's true
            // response is 0, and the estimate must say so. Between that and some LSB a rounder's gain for a
            // lone tone is anything from 0 to 1.27, and there is no truth to compare with.
            const double output_lsb = 0.9 * std::abs(ideal) * 32768.0;
            const bool silent = x_is_chirp && output_lsb < 0.45;
            if (x_is_chirp && !silent && output_lsb < 4.0) continue;
            keep_larger(worst, silent ? std::abs(ideal + point.difference) : std::abs(point.difference));
        }
        CHECK(worst < 1e-5);
        CHECK(worst > 0.0);
    };
    // Rounding noise is white, rms 2^-15 / sqrt(12) = 8.8e-6, and independent of the stimulus: a bin of n averages
    // strays by 8.8e-6 / (rms of x, 0.52) / sqrt(n), n = 487 at 50 % overlap counting for some 460: 8e-7. The largest
    // of 2049 bins lies at sqrt(ln 2049) = 2.8 of that: 2.2e-6.
    check(*make_welch_response(4096), quantised_noise(length, seed), 0.0, 0.5, false);
    // A chirp spends 2 (0.49 / segments) of its time in a bin, at the level of a sine: about the same figure.
    check(*make_welch_response(4096), chirp(length, 0.001, 0.49), 0.002, 0.48, true);
    // Tones at multiples of 1e-4: rounding repeats with them and spreads over 5000 lines of amplitude
    // 8.8e-6 sqrt(2 / 5000) = 1.8e-7, over the 0.9 / 8 of a tone 1.6e-6, the largest of eight some three times that.
    check(*make_tone_response(tones_of_test, length), multitone(length, tones_of_test), 0.0, 0.5, false);
}

TEST_CASE("response: of a wrong filter the estimate is the true response", "[measure]") {
    // The board's notch sits one part in a hundred off: wrong by up to 0.1 near 50 Hz.
    const BiquadSection design = notch, board = cookbook(Shape::notch, 0.0505, 5.0);
    const std::size_t length = 1000000;
    const auto worst_of = [&](ResponseMeasure& measure, const std::vector<double>& x, double from, double to) {
        const auto error = difference_of(rounded_to_q15(filtered(board, x)), filtered(design, x));
        double worst = 0.0, wrong = 0.0;
        for (const ResponsePoint& point : points_of(measure, x, error)) {
            const double f = point.cycles_per_sample;
            if (f < from || f > to) continue;
            keep_larger(worst, std::abs(response(design, f) + point.difference - response(board, f)));
            keep_larger(wrong, std::abs(response(board, f) - response(design, f)));
        }
        CHECK(wrong > 0.05);  // the filters do differ
        return worst;
    };
    // The rest falls off with 10 samples' time constant (Q / (pi f) = 32 samples) against the segment of 4096:
    // bias of second order in 32 / 4096 near the notch, and the same fraction at random, averaged over 487 segments.
    CHECK(worst_of(*make_welch_response(4096), quantised_noise(length, 1002), 0.0, 0.5) < 2e-3);
    // A coherent chirp averages less at random: first order in 32 / 4096 of the 0.1.
    CHECK(worst_of(*make_welch_response(4096), chirp(length, 0.001, 0.49), 0.002, 0.48) < 5e-3);
    // Tones, 50 Hz among them, suffer only rounding: as for the right filter.
    CHECK(worst_of(*make_tone_response(tones_of_test, length), multitone(length, tones_of_test), 0.0, 0.5) < 1e-5);
}

TEST_CASE("response: a gain that is wrong by a tenth is seen exactly", "[measure]") {
    // e = x / 8: no memory, so nothing leaks, and only the transform's rounding is left.
    const auto x = quantised_noise(20000, 1003);
    auto e = x;
    for (double& sample : e) sample *= 0.125;
    for (const ResponsePoint& point : points_of(*make_welch_response(512), x, e)) {
        CHECK(std::abs(point.difference - 0.125) < 1e-15);
    }
    for (const ResponsePoint& point : points_of(*make_tone_response({0.1, 0.2}, 20000), x, e)) {
        CHECK(std::abs(point.difference - 0.125) < 1e-15);
    }
}

TEST_CASE("response: a delay of the error turns its phase backwards", "[measure]") {
    // e[n] = x[n-1] / 4: difference 0.25 e^(-j 2 pi f). The sign of the cross spectrum shows here.
    const auto x = quantised_noise(400000, 1004);
    std::vector<double> e(x.size(), 0.0);
    for (std::size_t n = 1; n < x.size(); ++n) e[n] = 0.25 * x[n - 1];
    for (const ResponsePoint& point : points_of(*make_welch_response(1024), x, e)) {
        if (point.cycles_per_sample == 0.0 || point.cycles_per_sample == 0.5) continue;
        const Complex expected = std::polar(0.25, -2.0 * pi * point.cycles_per_sample);
        CHECK(std::abs(point.difference - expected) < 5e-4);  // 1 / 1024 of 0.25 at random over 780 segments
    }
    const std::vector<double> tones{0.0371, 0.25, 0.411};
    const auto t = multitone(400000, tones);
    for (std::size_t n = 1; n < t.size(); ++n) e[n] = 0.25 * t[n - 1];
    for (const ResponsePoint& point : points_of(*make_tone_response(tones, 400000), t, e)) {
        CHECK(std::abs(point.difference - std::polar(0.25, -2.0 * pi * point.cycles_per_sample)) < 1e-9);
    }
}

TEST_CASE("response: no error gives a difference of exactly 0, no stimulus none at all", "[measure]") {
    const auto x = quantised_noise(5000, 1005);
    const std::vector<double> zeros(5000, 0.0);
    for (const auto& make : {std::function([] { return make_welch_response(256); }), std::function([] {
                                 return make_tone_response({0.1, 0.3}, 5000);
                             })}) {
        for (const ResponsePoint& point : points_of(*make(), x, zeros)) {
            CHECK(point.difference == Complex());
            CHECK(point.stimulus_power > 0.0);
        }
        for (const ResponsePoint& point : points_of(*make(), zeros, x)) {
            CHECK(std::isnan(point.difference.real()));
            CHECK(point.stimulus_power == 0.0);
        }
    }
}

TEST_CASE("response: samples before the first realisation and behind the last count nothing", "[measure]") {
    const auto x = noise(5000, 1008), e = noise(5000, 1009);
    const auto all = points_of(*make_tone_response({0.3, 0.1}, 300, 10, 777), x, e);
    const auto bare = points_of(*make_tone_response({0.3, 0.1}, 300, 10), std::span(x).subspan(777, 3000),
                                std::span(e).subspan(777, 3000));
    REQUIRE(all.size() == 2);
    for (std::size_t k = 0; k < 2; ++k) {
        CHECK(all[k].difference == bare[k].difference);
        CHECK(all[k].averages == 10);
    }
}

TEST_CASE("response: any split gives the same figures, bit for bit", "[measure]") {
    const auto x = noise(10007, 1006), e = noise(10007, 1007);
    for (const auto& make : {std::function([] { return make_welch_response(1024); }),
                             std::function([] { return make_welch_response(64); }), std::function([] {
                                 return make_tone_response({0.3, 0.1}, 300, 20, 1001);
                             }),
                             std::function([] {
                                 return make_tone_response({0.3, 0.1}, 10007);
                             })}) {
        const auto whole = points_of(*make(), x, e);
        for (const Split split : every_split) {
            const auto measure = make();
            for_blocks(split, x.size(), [&](std::size_t first, std::size_t count) {
                measure->add(std::span(x).subspan(first, count), std::span(e).subspan(first, count));
                if (split == Split::prime) (void)measure->sums();
            });
            measure->finish();
            const auto points = measure->value();
            REQUIRE(points.size() == whole.size());
            for (std::size_t i = 0; i < points.size(); ++i) {
                REQUIRE(points[i].difference == whole[i].difference);
                REQUIRE(points[i].stimulus_power == whole[i].stimulus_power);
                REQUIRE(points[i].averages == whole[i].averages);
            }
        }
    }
}

TEST_CASE("welch: bins, segments and powers", "[measure]") {
    const std::size_t segment = 128;
    const auto averages = [&](std::size_t length) {
        const std::vector<double> ones(length, 1.0);
        return points_of(*make_welch_response(segment), ones, ones).front().averages;
    };
    CHECK(averages(0) == 0);
    CHECK(averages(1) == 1);    // padded
    CHECK(averages(128) == 1);  // exactly one
    CHECK(averages(129) == 2);  // one and a cut one
    CHECK(averages(192) == 2);
    CHECK(averages(193) == 3);
    CHECK(averages(128 + 7 * 64) == 8);
    const std::vector<double> ones(1280, 1.0);
    const auto points = points_of(*make_welch_response(segment), ones, ones);
    REQUIRE(points.size() == 65);
    CHECK((points.front().cycles_per_sample == 0.0 && points.back().cycles_per_sample == 0.5));
    CHECK(points[1].cycles_per_sample == 1.0 / 128.0);
    // A periodic Hann window sums to N / 2, and has -N / 4 in the next bin and 0 beyond.
    CHECK_THAT(points[0].stimulus_power, Catch::WithinRel(4096.0, 1e-14));
    CHECK_THAT(points[1].stimulus_power, Catch::WithinRel(1024.0, 1e-14));
    CHECK(points[2].stimulus_power < 1e-25);
}

TEST_CASE("welch: the segment fits the record", "[measure]") {
    CHECK(response_segment_for(0) == 64);
    CHECK(response_segment_for(288) == 64);
    CHECK(response_segment_for(575) == 64);
    CHECK(response_segment_for(576) == 128);  // 128 + 7 x 64
    CHECK(response_segment_for(18431) == 2048);
    CHECK(response_segment_for(18432) == 4096);
    CHECK(response_segment_for(1000000000000) == 4096);
}

TEST_CASE("welch: a NaN in the error spoils every bin it may have touched", "[measure]") {
    const auto x = quantised_noise(3000, 1008);
    std::vector<double> e(3000, 0.0);
    e[700] = std::numeric_limits<double>::quiet_NaN();
    for (const ResponsePoint& point : points_of(*make_welch_response(256), x, e)) {
        CHECK(std::isnan(std::abs(point.difference)));
    }
}

TEST_CASE("tones: ascending, whatever order they were asked in", "[measure]") {
    const auto points = points_of(*make_tone_response({0.3, 0.1, 0.2}, 100), noise(100, 1), noise(100, 2));
    REQUIRE(points.size() == 3);
    CHECK((points[0].cycles_per_sample == 0.1 && points[1].cycles_per_sample == 0.2 &&
           points[2].cycles_per_sample == 0.3));
    CHECK(points[0].averages == 1);
}

TEST_CASE("tones: phases hold over a long record", "[measure]") {
    // e is x late by one sample, at a frequency without a short period, in long arithmetic. A drift of the phase by
    // 1e-12 a sample would turn the correlation of the last part by 1e-6.
    const double f = 0.2137;
    const std::size_t length = 2000000;
    std::vector<double> x(length), e(length);
    for (std::size_t n = 0; n < length; ++n) {
        const long double turns = std::fmod(static_cast<long double>(f) * static_cast<long double>(n), 1.0L);
        x[n] = static_cast<double>(std::cos(2.0L * 3.14159265358979323846264338328L * turns));
        e[n] = n == 0 ? 0.0 : 0.5 * x[n - 1];
    }
    const auto point = points_of(*make_tone_response({f}, static_cast<std::int64_t>(length)), x, e).front();
    CHECK(std::abs(point.difference - std::polar(0.5, -2.0 * pi * f)) < 1e-11);
    // |X| = length / 4 for a cosine of amplitude 1 under a Hann window.
    CHECK_THAT(std::sqrt(point.stimulus_power), Catch::WithinRel(static_cast<double>(length) / 4.0, 1e-11));
}

TEST_CASE("tones: samples beyond the length count nothing", "[measure]") {
    const auto x = noise(1500, 3), e = noise(1500, 4);
    const auto longer = points_of(*make_tone_response({0.1}, 1000), x, e);
    const auto exact = points_of(*make_tone_response({0.1}, 1000), std::span(x).first(1000), std::span(e).first(1000));
    CHECK(longer[0].difference == exact[0].difference);
    CHECK(longer[0].stimulus_power == exact[0].stimulus_power);
}

TEST_CASE("tones: resolved from 4 / length on, from each other and from both ends", "[measure]") {
    CHECK(tones_resolved({}, 100));
    CHECK(tones_resolved({0.04}, 100));
    CHECK_FALSE(tones_resolved({0.0399}, 100));
    CHECK(tones_resolved({0.46}, 100));
    CHECK_FALSE(tones_resolved({0.4601}, 100));
    CHECK(tones_resolved({0.2, 0.1, 0.14}, 100));
    CHECK_FALSE(tones_resolved({0.2, 0.1, 0.1399}, 100));
    CHECK_FALSE(tones_resolved({0.1, 0.1}, 100));
    CHECK_FALSE(tones_resolved({0.1}, 0));
    CHECK_FALSE(tones_resolved({std::numeric_limits<double>::quiet_NaN()}, 100));
}

TEST_CASE("gain in dB", "[measure]") {
    CHECK(gain_db({1.0, 0.0}) == 0.0);
    CHECK_THAT(gain_db({0.0, -0.5}), Catch::WithinAbs(-6.020599913279624, 1e-14));
    CHECK_THAT(gain_db({6.0, 8.0}), Catch::WithinAbs(20.0, 1e-14));
    CHECK(gain_db({0.0, 0.0}) == -std::numeric_limits<double>::infinity());
}
