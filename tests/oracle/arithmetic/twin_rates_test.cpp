// Twins that change the rate: against moving sums, convolutions and the twins of the same taps at one rate.
#include <cmath>

#include "tests/oracle/arithmetic/twin_support.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

Given word(const char* name, const char* value) { return {name, std::string(value)}; }
Given number(const char* name, int value) { return {name, whole(value)}; }

using Wide = long double;  // 64 bits of mantissa: sums below 2^63 are whole in it

/// `order` moving sums of `window` samples, one after the other.
std::vector<Wide> moving_sums(std::vector<Wide> x, int order, std::size_t window) {
    for (int k = 0; k < order; ++k) {
        std::vector<Wide> y(x.size(), 0.0L);
        for (std::size_t n = 0; n < x.size(); ++n) {
            for (std::size_t i = 0; i < window && i <= n; ++i) y[n] += x[n - i];
        }
        x = y;
    }
    return x;
}

std::vector<Wide> values_of_codes(const Codes& codes, Code zero, std::size_t factor = 1) {
    std::vector<Wide> values;
    for (const Code code : codes) {
        values.push_back(static_cast<Wide>(code) - static_cast<Wide>(zero));
        values.resize(values.size() + factor - 1, 0.0L);
    }
    return values;
}

FilterStage cic(const char* kind, int order, int factor, int delay, std::initializer_list<Given> promised,
                std::optional<int> shift = std::nullopt) {
    const Given n = number("order", order), r = number("factor", factor), m = number("delay_samples", delay);
    if (!shift) return promised_stage(kind, {n, r, m}, promised);
    return promised_stage(kind, {n, r, m, number("shift_bits", *shift)}, promised);
}

FilterStage waiting(const char* kind, int phase, std::initializer_list<Given> promised) {
    const std::vector<double> taps{0.4, -0.2, 0.6, 0.3, -0.5, 0.25, 0.125};
    const Given r = number("factor", 5), p = number("phase_samples", phase);
    if (kind == std::string("fir-decimator")) return promised_stage(kind, {{"taps", taps}, r, p}, promised);
    return promised_stage(kind, {number("order", 3), r, p, number("shift_bits", 7)}, promised);
}

void check_splits(const FilterStage& stage, const Codes& in) {
    const auto twin = twin_of({stage});
    const Codes expected = run(*twin, in);
    for (const Split split : every_split) {
        twin->reset();
        Codes out;
        for_blocks(split, in.size(), [&](std::size_t first, std::size_t count) {
            Codes part(twin->outputs_for(count));
            twin->process(std::span(in).subspan(first, count), part);
            out.insert(out.end(), part.begin(), part.end());
        });
        CHECK(out == expected);
    }
    // The state of one carries the other on, whatever the phase.
    const auto other = twin_of({stage});
    twin->reset();
    run(*twin, Codes(in.begin(), in.begin() + 101));
    REQUIRE(other->set_state(twin->state()));
    const Codes rest(in.begin() + 101, in.begin() + 300);
    CHECK(run(*twin, rest) == run(*other, rest));
}

}  // namespace

TEST_CASE("cic: a decimator returns each factor-th of the moving sums, shifted or divided", "[twin]") {
    const Codes in = noise_codes(2000, 71);
    for (const int delay : {1, 2}) {
        const std::vector<Wide> sums = moving_sums(values_of_codes(in, 0), 3, static_cast<std::size_t>(5 * delay));
        Codes shifted, divided;
        for (std::size_t n = 0; n < sums.size(); n += 5) {
            shifted.push_back(static_cast<Code>(std::floor(sums[n] / 1024.0L)));
            divided.push_back(static_cast<Code>(std::trunc(sums[n] / (125.0L * delay * delay * delay))));
        }
        const auto by_shift = cic("cic-decimator", 3, 5, delay, {word("rounding", "floor")}, 10);
        CHECK(run(*twin_of({by_shift}), in) == shifted);
        const auto by_gain = cic("cic-decimator", 3, 5, delay, {word("rounding", "toward-zero")});
        CHECK(run(*twin_of({by_gain}), in) == divided);
        check_splits(by_shift, in);
    }
}

TEST_CASE("decimators: with a phase the outputs are those of phase 0 for an input that comes so much later", "[twin]") {
    // What is returned at index m R + p is what phase 0 returns at (m + 1) R of an input with R - p zeros before it.
    const Codes in = noise_codes(1003, 78);
    for (const char* kind : {"fir-decimator", "cic-decimator"}) {
        for (const bool is_float : {false, true}) {
            if (is_float && kind == std::string("cic-decimator")) continue;
            const std::initializer_list<Given> whole_words{number("coefficient_fraction_bits", 12),
                                                           word("rounding", "half-up")},
                cic_words{word("rounding", "half-up")}, floats{word("number", "float32"), word("rounding", "half-up")};
            const auto& promised = is_float ? floats : kind == std::string("cic-decimator") ? cic_words : whole_words;
            for (int phase = 1; phase < 5; ++phase) {
                INFO(kind << ", phase " << phase);
                Codes later(static_cast<std::size_t>(5 - phase), 0);
                later.insert(later.end(), in.begin(), in.end());
                Codes expected = run(*twin_of({waiting(kind, 0, promised)}), later);
                expected.erase(expected.begin());
                const auto stage = waiting(kind, phase, promised);
                CHECK(run(*twin_of({stage}), in) == expected);
                check_splits(stage, in);
            }
        }
    }
}

TEST_CASE("cic: an interpolator returns the moving sums of its samples and zeros", "[twin]") {
    const Codes in = noise_codes(400, 72);
    for (const int delay : {1, 2}) {
        const std::vector<Wide> sums = moving_sums(values_of_codes(in, 0, 4), 3, static_cast<std::size_t>(4 * delay));
        Codes expected;
        for (const Wide sum : sums) {
            expected.push_back(static_cast<Code>(std::floor(sum / (16.0L * delay * delay * delay) + 0.5L)));
        }
        const auto stage = cic("cic-interpolator", 3, 4, delay, {word("rounding", "half-up")});
        CHECK(run(*twin_of({stage}), in) == expected);
        check_splits(stage, in);
    }
}

TEST_CASE("cic: registers of Hogenauer's width hold, one bit less does not", "[twin]") {
    // COMPUTED from Hogenauer (1981); the first row's parameters SEEN-2, the second row's figures SEEN.
    const CsvTable table("cic-bit-growth.csv");
    int compared = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const int order = static_cast<int>(table.number(row, "stages N"));
        const int factor = static_cast<int>(table.number(row, "rate change R"));
        const int delay = static_cast<int>(table.number(row, "differential delay M"));
        const int bits = static_cast<int>(table.number(row, "Bin"));
        const int width = static_cast<int>(table.number(row, "full register width"));
        if (bits == 1) continue;  // no format
        INFO("N = " << order << ", R = " << factor << ", M = " << delay << ", " << bits << " bits");
        const char* format = bits == 16 ? "i16" : bits == 12 ? "u12" : "i8";
        const Code zero = bits == 12 ? 2048 : 0, lowest = zero - (1 << (bits - 1));
        // The lowest code for long: the only input that needs the whole of the register.
        const auto length = static_cast<std::size_t>((order + 2) * factor * delay);
        const Codes in(length, lowest);
        auto chain = described_chain(
            {cic("cic-decimator", order, factor, delay, {word("rounding", "floor"), number("state_bits", width)})},
            format, format);
        CHECK(run(*make_twin(chain), in).back() == lowest);
        chain.stages[0].state.bits = width - 1;
        CHECK(run(*make_twin(chain), in).back() != lowest);
        const auto narrow =
            cic("cic-decimator", order, factor, delay, {word("rounding", "floor"), number("state_bits", width - 1)});
        CHECK(describe({narrow}, *sample_format(format), *sample_format(format), 1.0).problem);
        ++compared;
    }
    CHECK(compared == 8);
}

TEST_CASE("cic: registers that saturate lose what wrapping ones keep", "[twin]") {
    const Codes in(600, 1000);
    const auto with = [&](const char* overflow) {
        const auto stage = cic("cic-decimator", 2, 4, 1,
                               {word("rounding", "floor"), number("state_bits", 20), word("state_overflow", overflow)});
        return run(*twin_of({stage}), in).back();
    };
    CHECK(with("wrap") == 1000);
    CHECK(with("saturate") != 1000);
}

TEST_CASE("fir-decimator and fir-interpolator: the taps at the higher rate, with what that computes alone", "[twin]") {
    const Codes in = telling_codes();
    const std::vector<double> taps{0.4, -0.2, 0.6, 0.3, -0.5, 0.25};
    const Given f = number("coefficient_fraction_bits", 15);
    const auto with = [&](const char* kind, std::initializer_list<Given> promised) {
        if (kind == std::string("fir")) return promised_stage(kind, {{"taps", taps}}, promised);
        return promised_stage(kind, {{"taps", taps}, number("factor", 3)}, promised);
    };
    Codes stuffed;
    for (const Code code : in) {
        stuffed.push_back(code);
        stuffed.insert(stuffed.end(), 2, 0);
    }
    for (const bool is_float : {false, true}) {
        const std::initializer_list<Given> whole_words{f, word("rounding", "half-even")},
            floats{word("number", "float32"), word("rounding", "half-even")};
        const auto& promised = is_float ? floats : whole_words;
        const Codes full = run(*twin_of({with("fir", promised)}), in);
        Codes each_third;
        for (std::size_t n = 0; n < full.size(); n += 3) each_third.push_back(full[n]);
        CHECK(run(*twin_of({with("fir-decimator", promised)}), in) == each_third);
        CHECK(run(*twin_of({with("fir-interpolator", promised)}), in) ==
              run(*twin_of({with("fir", promised)}), stuffed));
        check_splits(with("fir-decimator", promised), noise_codes(1000, 73));
        check_splits(with("fir-interpolator", promised), noise_codes(1000, 74));
    }
    // What a shortening left goes into the next sum that is computed, not into those that are not.
    const auto saving = with("fir-decimator", {f, word("rounding", "floor"), word("fraction_saving", "on")});
    std::int64_t rest = 0;
    Codes board;
    for (std::size_t n = 0; n < in.size(); n += 3) {
        std::int64_t acc = rest;
        for (std::size_t k = 0; k < taps.size() && k <= n; ++k) acc += std::llround(taps[k] * 32768) * in[n - k];
        const std::int64_t y = acc >> 15;
        rest = acc - y * 32768;
        board.push_back(static_cast<Code>(std::min<std::int64_t>(std::max<std::int64_t>(y, -32768), 32767)));
    }
    CHECK(run(*twin_of({saving}), in) == board);
    check_splits(saving, noise_codes(1000, 75));
}
