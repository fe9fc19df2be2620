// The stimuli that are asked: within their level, as a plan can say them, and no more of them than tell boards apart.
#include "oracle/explain/probes.hpp"

#include <catch2/catch.hpp>
#include <cmath>

#include "oracle/explain/hypothesis.hpp"
#include "stimuli/stimulus.hpp"

using namespace halflsb;

namespace {

Signal signal_of(const char* format) {
    Signal signal;
    signal.rate_hz = 1200.0;
    signal.input = *sample_format(format);
    signal.output = signal.input;
    return signal;
}

BoardDescription average(Rounding rounding, int points = 16) {
    FilterStage stage;
    stage.design = MovingAverage{points};
    stage.kind = "moving-average";
    stage.arithmetic.rounding = rounding;
    return {{stage}};
}

}  // namespace

TEST_CASE("explain: no probe goes beyond its peak, and the loudest reaches it", "[explain]") {
    for (const char* format : {"q15", "i8", "u12", "i24", "q31", "f32"}) {
        for (const double peak : {1.0, 0.3, 0.01}) {
            const Signal signal = signal_of(format);
            double loudest = 0.0;
            const auto probes = probes_for(signal, peak);
            CHECK(probes.size() == 9);
            // Quantising may go half a step beyond, of a float 2^-25 of its value.
            const double step = signal.input.has_lsb() ? lsb_value(signal.input) : 0x1p-24;
            for (const Probe& probe : probes) {
                CAPTURE(format, peak, probe.what);
                for (const Code code : probe.codes) {
                    const double value = std::abs(value_of(signal.input, code));
                    loudest = std::max(loudest, value);
                    if (value > peak * full_scale_value(signal.input) + step / 2.0) FAIL("a sample of " << value);
                }
            }
            CHECK(loudest >= 0.99 * peak * full_scale_value(signal.input) - step);
        }
    }
}

TEST_CASE("explain: a probe is what its words make", "[explain]") {
    const Signal signal = signal_of("q15");
    for (const Probe& probe : probes_for(signal, 0.7)) {
        const auto made = make_stimulus(probe.words.shape, probe.words.values, {signal.rate_hz, signal.input});
        REQUIRE(made);
        std::vector<Code> codes(static_cast<std::size_t>((*made)->length_samples()));
        fill_codes(**made, signal.input, Rounding::half_up, 0, codes);
        CHECK(codes == probe.codes);
    }
}

TEST_CASE("explain: as few questions as tell the boards apart", "[explain]") {
    const Signal signal = signal_of("q15");
    const auto probes = probes_for(signal);
    const auto questions = [&](const std::vector<BoardDescription>& boards, const std::vector<Probe>& of) {
        return separating_probes(boards, signal, of).size();
    };
    CHECK(questions({}, probes) == 0);
    CHECK(questions({average(Rounding::floor)}, probes) == 0);
    CHECK(questions({average(Rounding::floor), average(Rounding::floor)}, probes) == 0);
    CHECK(questions({average(Rounding::floor), average(Rounding::half_up), average(Rounding::half_even),
                     average(Rounding::half_away), average(Rounding::toward_zero)},
                    probes) == 1);
    // A positive step tells the window and not the rounding below zero: two questions where no one probe does both.
    std::vector<Probe> two{probes[4], probes[5]};
    for (Probe& probe : two) probe.codes.resize(64);
    const std::vector<BoardDescription> boards{average(Rounding::floor), average(Rounding::toward_zero)};
    CHECK(separating_probes(boards, signal, {two[0]}).empty());
    std::fill(two[1].codes.begin(), two[1].codes.end(), Code{-5});
    CHECK(separating_probes(boards, signal, two) == std::vector<std::size_t>{1});
}
