// Initial: what stands before a stage's first sample.
#include <algorithm>
#include <limits>

#include "oracle/filters/rates.hpp"
#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Named {
    const char* name;
    FilterChain chain;
};

FilterStage begun(FilterDesign design, Initial initial) {
    FilterStage made = stage(std::move(design));
    made.initial = initial;
    return made;
}

std::vector<Named> first_sample_kinds() {
    const Initial first = Initial::first_sample;
    return {
        {"moving average", {begun(MovingAverage{16}, first)}},
        {"fir", {begun(Fir{noise(33, 1)}, first)}},
        {"sections",
         {begun(BiquadCascade{{cookbook(Shape::low_pass, 0.01, 0.7), cookbook(Shape::notch, 0.1, 3.0)}}, first)}},
        {"section with a1 > 0", {begun(BiquadCascade{{cookbook(Shape::low_pass, 0.4, 0.7)}}, first)}},
        {"DC blocker", {begun(BiquadCascade{{{1.0, -1.0, 0.0, -0.995, 0.0}}}, first)}},
        {"comb", {begun(Comb{7, 0.8, -0.5, 0.6}, first)}},
        {"recursion", {begun(Recursion{{0.2, 0.1}, {1.0, -1.2, 0.5}}, first)}},
        {"median", {begun(Median{6}, first)}},
        {"fir decimator", {begun(FirDecimator{noise(20, 2), 4}, first)}},
        {"fir interpolator", {begun(FirInterpolator{noise(20, 3), 4}, first)}},
        {"chain", {begun(Fir{noise(9, 4)}, first), stage(MovingAverage{5}), begun(MovingAverage{8}, first)}},
    };
}

std::vector<double> outputs(Filter& filter, std::span<const double> in) {
    std::vector<double> out(filter.outputs_for(in.size()));
    filter.process(in, out);
    return out;
}

}  // namespace

TEST_CASE("start: first-sample equals a first sample that has gone on for ever", "[filters]") {
    for (const auto& [name, chain] : first_sample_kinds()) {
        INFO(name);
        if (name == std::string("chain")) continue;  // its second stage starts from zeros
        const auto in = noise(2000, 5);
        // 4000 samples ahead: all of it gone, 0.995^4000 = 2e-9 of the DC blocker's edge being the most that is left.
        const std::size_t ahead = 8000;
        std::vector<double> longer(ahead, in[0]);
        longer.insert(longer.end(), in.begin(), in.end());
        const auto out = outputs(*make_filter(chain), in);
        const auto expected = outputs(*make_filter(from_rest(chain)), longer);
        const auto skipped = static_cast<std::size_t>(outputs_after(chain, ahead));
        REQUIRE(expected.size() == skipped + out.size());
        const double bound = 1e-13 * (1.0 + (is_linear(chain) ? l1_norm(chain) : 1.0));
        double largest = 0.0;
        for (std::size_t n = 0; n < out.size(); ++n)
            largest = std::max(largest, std::fabs(out[n] - expected[skipped + n]));
        INFO("largest " << largest << ", bound " << bound);
        CHECK(largest <= bound);
        // It matters: from zeros the first output is another one.
        CHECK(std::fabs(outputs(*make_filter(from_rest(chain)), in)[0] - out[0]) > 1e-3);
    }
}

TEST_CASE("start: a constant that was always there comes out constant from the first sample", "[filters]") {
    for (const auto& [name, chain] : first_sample_kinds()) {
        INFO(name);
        if (name == std::string("chain")) continue;
        const auto out = outputs(*make_filter(chain), std::vector<double>(300, 0.75));
        if (rate_ratio(chain).up > 1) continue;  // its outputs repeat in the phase
        for (const double y : out) REQUIRE(std::fabs(y - out[0]) <= 1e-14 * (1.0 + std::fabs(out[0])));
    }
    // Codes: exactly the mean.
    CHECK(run({begun(MovingAverage{1000}, Initial::first_sample)}, std::vector<double>(5, 12345.0)) ==
          std::vector<double>(5, 12345.0));
}

TEST_CASE("start: any split and a reset keep the start, whatever the next first sample", "[filters]") {
    const auto in = noise(2503, 6), other = noise(1001, 7);
    for (const auto& [name, chain] : first_sample_kinds()) {
        const auto filter = make_filter(chain);
        (void)outputs(*filter, other);
        for (const Split split : every_split) {
            INFO(name << ", split " << static_cast<int>(split));
            filter->reset();
            std::vector<double> out;
            for_blocks(split, in.size(), [&](std::size_t first, std::size_t count) {
                const auto piece = outputs(*filter, std::span(in).subspan(first, count));
                out.insert(out.end(), piece.begin(), piece.end());
            });
            CHECK(same_bits(out, outputs(*make_filter(chain), in)));
        }
    }
}

TEST_CASE("start: each stage begins with its own first sample", "[filters]") {
    // The first stage passes 0.5 x from zeros; the second must hold 0.5 x0, not x0.
    const FilterChain chain{stage(Fir{{0.5, 0.5}}), begun(MovingAverage{4}, Initial::first_sample)};
    CHECK(run(chain, std::vector<double>{8.0, 8.0}) == std::vector<double>{4.0, 5.0});
}

TEST_CASE("start: a growing moving average is the mean of the samples so far", "[filters]") {
    const std::vector<double> in{4.0, 8.0, 0.0, -12.0, 1.0, 1.0};
    // By hand: 4; 12/2; 12/3; 0/4; then windows of 4: (8 + 0 - 12 + 1)/4, (0 - 12 + 1 + 1)/4.
    CHECK(run({begun(MovingAverage{4}, Initial::growing)}, in) == std::vector<double>{4.0, 6.0, 4.0, 0.0, -0.75, -2.5});
    const auto long_in = noise(3000, 8);
    const auto growing = run({begun(MovingAverage{100}, Initial::growing)}, long_in);
    const auto plain = run({stage(MovingAverage{100})}, long_in);
    CHECK(same_bits(std::span(growing).subspan(99), std::span(plain).subspan(99)));
    CHECK(growing[98] != plain[98]);
    const auto filter = make_filter({begun(MovingAverage{100}, Initial::growing)});
    for (const Split split : every_split) {
        filter->reset();
        std::vector<double> out(long_in.size());
        for_blocks(split, long_in.size(), [&](std::size_t first, std::size_t count) {
            filter->process(std::span(long_in).subspan(first, count), std::span(out).subspan(first, count));
        });
        CHECK(same_bits(out, growing));
    }
}

TEST_CASE("start: what is said of a chain is said of it at rest", "[filters]") {
    for (const auto& [name, chain] : first_sample_kinds()) {
        INFO(name);
        const FilterChain rest = from_rest(chain);
        for (const FilterStage& each : rest) CHECK(each.initial == Initial::zeros);
        CHECK(same_bits(impulse_response(chain, 50), impulse_response(rest, 50)));
        CHECK(l1_norm(chain) == l1_norm(rest));
        CHECK(flush_samples(chain, 1.0, 0x1p-16) == flush_samples(rest, 1.0, 0x1p-16));
    }
}

TEST_CASE("start: the word initial, and what has no such start", "[filters]") {
    const auto points = Given{"points", whole(8)};
    const auto start_of = [&](const char* word) {
        const auto made = make("moving-average", {points, {"initial", std::string(word)}});
        REQUIRE(made);
        return made->initial;
    };
    CHECK(make("moving-average", {points})->initial == Initial::zeros);
    CHECK(start_of("zeros") == Initial::zeros);
    CHECK(start_of("first-sample") == Initial::first_sample);
    CHECK(start_of("growing") == Initial::growing);
    CHECK(make("one-pole", {{"coefficient", 0.1}, {"initial", std::string("first-sample")}})->initial ==
          Initial::first_sample);
    CHECK(refusal("one-pole", {{"coefficient", 0.1}, {"initial", std::string("growing")}}) ==
          "initial: only a moving average grows with its first samples, not the kind one-pole\n"
          "  give initial = \"zeros\" or \"first-sample\"");
    const auto factor = Given{"factor", whole(8)}, order = Given{"order", whole(3)};
    CHECK(refusal("cic-decimator", {order, factor, {"initial", std::string("first-sample")}}) ==
          "initial: a cic-decimator cannot start as if its first sample had gone on for ever: its integrators never "
          "rest under a constant\n  give initial = \"zeros\"");
    CHECK(refusal("cic-interpolator", {order, factor, {"initial", std::string("zeros")}}) == "accepted");
    CHECK(refusal("fir", {{"taps", std::vector<double>{1.0}}, {"initial", std::string("ones")}}) ==
          "initial: \"ones\" is no start\n  give \"zeros\", \"first-sample\" or \"growing\"");
}
