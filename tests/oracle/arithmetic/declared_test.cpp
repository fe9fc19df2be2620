#include "oracle/arithmetic/declared.hpp"

#include <limits>

#include "oracle/filters/coefficients.hpp"
#include "tests/oracle/support.hpp"
#include "tests/support/declared.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {
std::unique_ptr<Filter> declared_of(const FilterChain& design, const SampleFormat& output, double gain) {
    const bool is_scaled = gain == 32768.0;
    return test::declared_filter(design, is_scaled ? *sample_format("q15") : output, output, gain);
}
}  // namespace

TEST_CASE("declared: coefficients round half away from zero to multiples of 2^-bits", "[arithmetic]") {
    // Ties of 3 fraction bits are odd multiples of 1/16.
    CHECK(rounded_coefficient(1.0 / 16, 3) == 0.125);
    CHECK(rounded_coefficient(-1.0 / 16, 3) == -0.125);
    CHECK(rounded_coefficient(3.0 / 16, 3) == 0.25);
    CHECK(rounded_coefficient(-3.0 / 16, 3) == -0.25);
    CHECK(rounded_coefficient(std::nextafter(1.0 / 16, 0.0), 3) == 0.0);
    CHECK(rounded_coefficient(-std::nextafter(1.0 / 16, 0.0), 3) == 0.0);
    CHECK(rounded_coefficient(std::nextafter(1.0 / 16, 1.0), 3) == 0.125);
    CHECK(rounded_coefficient(0.5, 0) == 1.0);
    CHECK(rounded_coefficient(-2.5, 0) == -3.0);
    CHECK(rounded_coefficient(0.4999999999999999, 0) == 0.0);  // add-half-and-floor would give 1
    CHECK(rounded_coefficient(0.1, 15) == 3277.0 / 32768.0);
    CHECK(rounded_coefficient(-0.1, 31) == -214748365.0 / 2147483648.0);
}

TEST_CASE("declared: a coefficient that already is a multiple stays as it is", "[arithmetic]") {
    CHECK(rounded_coefficient(0.1, 62) == 0.1);  // 2^-56 is the last bit of 0.1
    CHECK(rounded_coefficient(1e9, 62) == 1e9);
    CHECK(rounded_coefficient(123456789.0, 0) == 123456789.0);
    CHECK(rounded_coefficient(0x1.8p-62, 62) == 0x1p-61);  // 1.5 steps
    CHECK(rounded_coefficient(0x1p-64, 62) == 0.0);
}

TEST_CASE("declared: each stage by its own bits, a moving average never", "[arithmetic]") {
    const FilterChain design{stage(Fir{{0.3, -0.3}}, 2), stage(Fir{{0.3}}), stage(MovingAverage{5}, 1),
                             stage(BiquadCascade{{{0.3, 0.6, 0.3, -0.9, 0.4}}}, 3)};
    const FilterChain declared = declared_chain(design);
    REQUIRE(declared.size() == 4);
    CHECK(std::get<Fir>(declared[0].design).taps == std::vector<double>{0.25, -0.25});
    CHECK(std::get<Fir>(declared[1].design).taps == std::vector<double>{0.3});
    CHECK(std::get<MovingAverage>(declared[2].design).points == 5);
    const BiquadSection& s = std::get<BiquadCascade>(declared[3].design).sections[0];
    CHECK((s.b0 == 0.25 && s.b1 == 0.625 && s.b2 == 0.25 && s.a1 == -0.875 && s.a2 == 0.375));
    CHECK(declared[0].coefficient_fraction_bits == 2);
    CHECK(std::get<Fir>(design[0].design).taps[0] == 0.3);  // the design itself is untouched
}

TEST_CASE("declared: the output saturates at both rails and nowhere before", "[arithmetic]") {
    const auto q15 = *sample_format("q15");
    const auto filter = declared_of({}, q15, 1.0);
    const double lsb = 0x1p-15, top = 1.0 - lsb;
    const std::vector<double> in{
        -1.0, -1.0 + lsb / 4, std::nextafter(-1.0, -2.0), -7.0, top, top - lsb / 4, std::nextafter(top, 2.0), 1.0, 7.0,
        0.3};
    const std::vector<double> expected{-1.0, -1.0 + lsb / 4, -1.0, -1.0, top, top - lsb / 4, top, top, top, 0.3};
    CHECK(run(*filter, in) == expected);
}

TEST_CASE("declared: integer formats clamp at their codes, f32 only at the largest float", "[arithmetic]") {
    const auto i16 = declared_of({}, *sample_format("i16"), 1.0);
    CHECK(run(*i16, std::vector<double>{-40000, -32768, 32767, 32767.4, 40000}) ==
          std::vector<double>{-32768, -32768, 32767, 32767, 32767});
    const auto f32 = declared_of({}, *sample_format("f32"), 1.0);
    const double most = static_cast<double>(std::numeric_limits<float>::max());
    CHECK(run(*f32, std::vector<double>{-1e300, -5.0, 5.0, 1e300}) == std::vector<double>{-most, -5.0, 5.0, most});
}

TEST_CASE("declared: the gain comes before the rails", "[arithmetic]") {
    const auto filter = declared_of({}, *sample_format("i16"), 32768.0);
    CHECK(run(*filter, std::vector<double>{-1.0, 0.25, 1.0}) == std::vector<double>{-32768.0, 8192.0, 32767.0});
}

TEST_CASE("declared: a gain that is no power of two comes before the rails too", "[arithmetic]") {
    const auto i16 = *sample_format("i16"), q15 = *sample_format("q15"), q31 = *sample_format("q31");
    const auto through = [](const SampleFormat& in, const SampleFormat& out, double gain, double value) {
        return run(*test::declared_filter({}, in, out, gain), std::vector<double>{value}).front();
    };
    // Codes of 16 bits that are to be a full scale: far beyond 1, and within the word all the same.
    CHECK(through(i16, q15, 3.0e-5, 20000.0) == 20000.0 * 3.0e-5);
    CHECK(through(i16, q15, 4.0e-5, 30000.0) == 1.0 - 0x1p-15);
    CHECK(through(i16, q15, -4.0e-5, 30000.0) == -1.0);
    // Far below 1, and beyond the word.
    CHECK(through(q15, i16, 100000.0, 0.25) == 25000.0);
    CHECK(through(q15, i16, 100000.0, 0.5) == 32767.0);
    CHECK(through(q15, q31, -1.0e12, 0.5) == -1.0);
}

TEST_CASE("declared: saturation is of the output only, the state runs on", "[arithmetic]") {
    // Gain 3.2 with feedback of second order: the clipped output must not enter the recursion.
    const FilterChain chain{stage(BiquadCascade{{{1.0, 0.0, 0.0, -0.75, 0.0625}}})};
    const auto filter = declared_of(chain, *sample_format("q15"), 1.0);
    std::vector<double> in(40, 0.0);
    for (std::size_t n = 0; n < 10; ++n) in[n] = 0.9;
    const auto clipped = run(*filter, in), ideal = run(chain, in);
    for (std::size_t n = 0; n < in.size(); ++n) REQUIRE(clipped[n] == std::min(ideal[n], 1.0 - 0x1p-15));
}

TEST_CASE("declared: NaN passes the rails", "[arithmetic]") {
    const auto filter = declared_of({}, *sample_format("q15"), 1.0);
    CHECK(std::isnan(run(*filter, std::vector<double>{std::numeric_limits<double>::quiet_NaN()})[0]));
}

TEST_CASE("declared: reset, splits and in-place runs as every filter", "[arithmetic]") {
    const FilterChain chain{stage(Fir{noise(30, 61)}, 4), stage(MovingAverage{7}),
                            stage(BiquadCascade{{cookbook(Shape::low_pass, 0.1, 2.0)}}, 12)};
    const auto in = noise(3001, 62);
    const auto filter = declared_of(chain, *sample_format("q15"), 0.5);
    const auto whole = run(*filter, in);
    for (const Split split : every_split) {
        filter->reset();
        auto both = in;
        for_blocks(split, in.size(), [&](std::size_t first, std::size_t count) {
            const auto block = std::span(both).subspan(first, count);
            filter->process(block, block);
        });
        CHECK(same_bits(both, whole));
    }
    CHECK_FALSE(same_bits(whole, run(chain, in)));
}

namespace {

FilterStage with_words(FilterStage stage, const char* format, Overflow overflow = Overflow::saturate) {
    if (format != nullptr) stage.arithmetic.stage_format = *sample_format(format);
    stage.arithmetic.output_overflow = overflow;
    return stage;
}

std::vector<double> through(const char* format, Overflow overflow, const std::vector<double>& values) {
    return run(*declared_of({with_words(stage(Fir{{1.0}}), nullptr, overflow)}, *sample_format(format), 1.0), values);
}

}  // namespace

TEST_CASE("declared: wrapping comes in again at the other end, both sides of each end", "[arithmetic]") {
    const double lsb = 0x1p-15, top = 1.0 - lsb, below = std::nextafter(1.0, 0.0);
    CHECK(through("q15", Overflow::wrap, {-1.0, top, below, 1.0, 1.0 + lsb, -1.0 - lsb, 2.5, 3.0, -3.0, 1e6 + 0.25}) ==
          std::vector<double>{-1.0, top, below, -1.0, -1.0 + lsb, 1.0 - lsb, 0.5, -1.0, -1.0, 0.25});
    CHECK(through("i16", Overflow::wrap, {32767.5, 32768.0, -32768.0, -32769.0, 100000.0}) ==
          std::vector<double>{32767.5, -32768.0, -32768.0, 32767.0, 100000.0 - 131072.0});
    CHECK(through("q15", Overflow::saturate, {-1.5, -1.0, top, below, 7.0}) ==
          std::vector<double>{-1.0, -1.0, top, top, top});
    const double infinity = std::numeric_limits<double>::infinity(), nan = std::numeric_limits<double>::quiet_NaN();
    CHECK(std::isnan(through("q15", Overflow::wrap, {nan})[0]));
    CHECK(std::isnan(through("q15", Overflow::wrap, {infinity})[0]));
    CHECK(through("q15", Overflow::saturate, {infinity})[0] == top);
    CHECK(through("f32", Overflow::wrap, {1e300})[0] == static_cast<double>(std::numeric_limits<float>::max()));
}

TEST_CASE("declared: a stage overflows on its way to the next", "[arithmetic]") {
    const FilterStage loud = stage(Fir{{4.0}}), quiet = stage(Fir{{0.25}});
    const std::vector<double> in{0.1, 0.5, -0.5, 0.3};
    const double top = 1.0 - 0x1p-15;
    const auto declared = [&](const FilterChain& chain) {
        return run(*declared_of(chain, *sample_format("q15"), 1.0), in);
    };
    CHECK(declared({loud, quiet}) == in);  // wide enough for anything
    CHECK(declared({with_words(loud, "q15"), quiet}) == std::vector<double>{0.1, top / 4.0, -0.25, top / 4.0});
    CHECK(declared({with_words(loud, "q15", Overflow::wrap), quiet}) ==
          std::vector<double>{0.1, 0.0, 0.0, (4.0 * 0.3 - 2.0) / 4.0});
    // Three stages, two of them with ends: the first saturates what the second would wrap.
    CHECK(declared({with_words(loud, "q15"), with_words(stage(Fir{{2.0}}), "q15", Overflow::wrap), quiet}) ==
          std::vector<double>{0.2, (2.0 * top - 2.0) / 4.0, 0.0, (2.0 * top - 2.0) / 4.0});
}

TEST_CASE("declared: the last stage's words are those of the output", "[arithmetic]") {
    const FilterStage loud = stage(Fir{{4.0}});
    const std::vector<double> in{0.1, 0.5};
    const auto declared = [&](const FilterStage& last, const char* output, double gain) {
        return run(*declared_of({last}, *sample_format(output), gain), in);
    };
    CHECK(declared(with_words(loud, "q15", Overflow::wrap), "i16", 32768.0) ==
          std::vector<double>{0.1 * 4.0 * 32768.0, -32768.0 + 32768.0});
    CHECK(declared(with_words(loud, "q15"), "i32", 32768.0) == std::vector<double>{0.1 * 4.0 * 32768.0, 65536.0});
    CHECK(declared(with_words(loud, nullptr, Overflow::wrap), "q15", 1.0) == std::vector<double>{0.4, 0.0});
}

TEST_CASE("declared: a stage's state runs on behind its clipped output", "[arithmetic]") {
    const FilterStage integrator = stage(BiquadCascade{{{1.0, 0.0, 0.0, -0.75, 0.0625}}});
    const FilterChain chain{with_words(integrator, "q15"), stage(Fir{{0.5}})};
    std::vector<double> in(40, 0.0);
    for (std::size_t n = 0; n < 10; ++n) in[n] = 0.9;
    const auto ideal = run({integrator}, in), got = run(*declared_of(chain, *sample_format("q15"), 1.0), in);
    for (std::size_t n = 0; n < in.size(); ++n) REQUIRE(got[n] == 0.5 * std::min(ideal[n], 1.0 - 0x1p-15));
}

TEST_CASE("declared: stages with ends run in any blocks, in place, and after reset, and hide no NaN", "[arithmetic]") {
    const FilterChain chain{with_words(stage(Fir{noise(30, 61)}, 4), "q15"),
                            with_words(stage(Comb{37, 1.0, 0.5, -0.6}, 5), "q15", Overflow::wrap),
                            with_words(stage(BiquadCascade{{cookbook(Shape::low_pass, 0.1, 2.0)}}, 12), "q15")};
    auto in = noise(3001, 62);
    const auto filter = declared_of(chain, *sample_format("q15"), 0.5);
    const auto whole = run(*filter, in);
    FilterChain wide = chain;
    for (FilterStage& each : wide) each.arithmetic.stage_format.reset();
    CHECK_FALSE(same_bits(whole, run(*declared_of(wide, *sample_format("q15"), 0.5), in)));
    for (const Split split : every_split) {
        filter->reset();
        auto both = in;
        for_blocks(split, in.size(), [&](std::size_t first, std::size_t count) {
            const auto block = std::span(both).subspan(first, count);
            filter->process(block, block);
        });
        CHECK(same_bits(both, whole));
    }
    in[5] = std::numeric_limits<double>::quiet_NaN();
    filter->reset();
    CHECK(std::isnan(run(*filter, in).back()));
}

TEST_CASE("declared: each channel by its own chain", "[arithmetic]") {
    FilterChain chain{stage(Fir{{0.5}}), stage(Fir{{0.3}}, 2), stage(MovingAverage{2})};
    chain[1].channels = {2};
    const std::vector<double> in{0.75, 0.25};  // every sum below is exact
    const auto of = [&](int channel) {
        return run(*declared_of(chain_of_channel(chain, channel), *sample_format("q15"), 1.0), in);
    };
    CHECK(of(1) == std::vector<double>{0.1875, 0.25});
    CHECK(of(2) == std::vector<double>{0.046875, 0.0625});
}

TEST_CASE("declared: a one-pole rounds its k, its gain stays 1", "[arithmetic]") {
    FilterStage one_pole = stage(BiquadCascade{{{0.1, 0.0, 0.0, -0.9, 0.0}}}, 4);
    one_pole.kind = "one-pole";
    const FilterChain declared = declared_chain({one_pole});
    const BiquadSection& s = std::get<BiquadCascade>(declared[0].design).sections[0];
    CHECK((s.b0 == 0.125 && s.a1 == -0.875));
}
