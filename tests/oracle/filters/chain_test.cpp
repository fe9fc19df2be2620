#include "oracle/filters/chain.hpp"

#include <algorithm>
#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Named {
    const char* name;
    FilterChain chain;
};

std::vector<Named> every_kind() {
    const BiquadCascade low{{cookbook(Shape::low_pass, 0.004, 0.54), cookbook(Shape::low_pass, 0.004, 1.3)}};
    const BiquadCascade high{{cookbook(Shape::high_pass, 0.45, 2.0)}};
    return {
        {"empty", {}},
        {"moving average of 1", {stage(MovingAverage{1})}},
        {"moving average of 16", {stage(MovingAverage{16})}},
        {"moving average of 1000", {stage(MovingAverage{1000})}},
        {"fir of 1", {stage(Fir{{0.5}})}},
        {"fir of 64", {stage(Fir{noise(64, 31)})}},
        {"fir of 2100", {stage(Fir{noise(2100, 32)})}},
        {"low cascade", {stage(low)}},
        {"high cascade", {stage(high)}},
        {"comb both ways", {stage(Comb{7, 0.8, -0.5, 0.9})}},
        {"comb backward of 1", {stage(Comb{1, 0.2, 0.0, -0.8})}},
        {"comb forward of 1500", {stage(Comb{1500, 1.0, 0.5, 0.0})}},
        {"one-pole", {stage(BiquadCascade{{{0x1p-6, 0.0, 0.0, 0x1p-6 - 1.0, 0.0}}})}},
        {"DC blocker", {stage(BiquadCascade{{{1.0, -1.0, 0.0, -0.995, 0.0}}})}},
        {"recursion", {stage(Recursion{{0.1, 0.2, 0.3}, {1.0, -1.5, 0.7, -0.1}})}},
        {"all kinds",
         {stage(Fir{noise(33, 33)}), stage(low), stage(MovingAverage{10}), stage(high),
          stage(Comb{300, 1.0, 0.3, -0.4})}},
    };
}

}  // namespace

TEST_CASE("filter: state survives a block boundary, any split gives the same bits", "[filters]") {
    const auto in = noise(5003, 41);
    for (const auto& [name, chain] : every_kind()) {
        const auto whole = run(chain, in);
        for (const Split split : every_split) {
            INFO(name << ", split " << static_cast<int>(split));
            const auto filter = make_filter(chain);
            std::vector<double> out(in.size());
            for_blocks(split, in.size(), [&](std::size_t first, std::size_t count) {
                filter->process(std::span(in).subspan(first, count), std::span(out).subspan(first, count));
            });
            CHECK(same_bits(out, whole));
        }
    }
}

TEST_CASE("filter: reset equals fresh", "[filters]") {
    const auto before = noise(1777, 42), in = noise(3000, 43);
    for (const auto& [name, chain] : every_kind()) {
        INFO(name);
        const auto filter = make_filter(chain);
        const auto first = run(*filter, before);
        filter->reset();
        CHECK(same_bits(run(*filter, in), run(chain, in)));
        if (!chain.empty() && name != std::string("moving average of 1") && name != std::string("fir of 1")) {
            filter->reset();
            (void)run(*filter, before);
            CHECK_FALSE(same_bits(run(*filter, in), run(chain, in)));  // without reset the past shows
        }
    }
}

TEST_CASE("filter: the output may take the place of the input", "[filters]") {
    const auto in = noise(4000, 44);
    for (const auto& [name, chain] : every_kind()) {
        INFO(name);
        auto both = in;
        make_filter(chain)->process(both, both);
        CHECK(same_bits(both, run(chain, in)));
    }
}

TEST_CASE("filter: an empty block changes nothing", "[filters]") {
    const auto in = noise(100, 45);
    for (const auto& [name, chain] : every_kind()) {
        INFO(name);
        const auto filter = make_filter(chain);
        filter->process({}, {});
        const auto out = run(*filter, in);
        filter->process({}, {});
        CHECK(same_bits(out, run(chain, in)));
    }
}

TEST_CASE("filter: it scales, adds, and moves with time", "[filters]") {
    const std::size_t length = 4000, delay = 300;
    const auto a = noise(length, 46), b = noise(length, 47);
    std::vector<double> mixed(length), later(length, 0.0);
    for (std::size_t n = 0; n < length; ++n) mixed[n] = 3.0 * a[n] - 0.7 * b[n];
    for (std::size_t n = delay; n < length; ++n) later[n] = a[n - delay];
    for (const auto& [name, chain] : every_kind()) {
        const auto ya = run(chain, a), yb = run(chain, b), ym = run(chain, mixed), yl = run(chain, later);
        // Rounding errors of three runs, each within (N + 2) 2^-53 of the magnitudes (fir of 2100: 4e-13 x 3.7 L1 of
        // 1050), for the others far less.
        const double bound = 1e-12 * (1.0 + 3.7 * l1_norm(chain, 1e-6));
        double mixture = 0.0, shift = 0.0;
        for (std::size_t n = 0; n < length; ++n) {
            mixture = std::max(mixture, std::fabs(ym[n] - (3.0 * ya[n] - 0.7 * yb[n])));
            shift = std::max(shift, std::fabs(yl[n] - (n >= delay ? ya[n - delay] : 0.0)));
        }
        INFO(name << ": mixture " << mixture << ", shift " << shift << ", bound " << bound);
        CHECK(mixture < bound);
        CHECK(shift < bound);
    }
}

TEST_CASE("chain: stages follow one another", "[filters]") {
    const FilterStage first = stage(Fir{{1.0, -0.5}}), second = stage(MovingAverage{4});
    const auto in = noise(500, 48);
    const auto inner = run(FilterChain{first}, in);
    CHECK(same_bits(run({first, second}, in), run(FilterChain{second}, inner)));
}

TEST_CASE("filter: a NaN shows until it is forgotten or reset", "[filters]") {
    std::vector<double> in(4000, 0.0);
    in[3] = std::numeric_limits<double>::quiet_NaN();
    for (const auto& [name, chain] : every_kind()) {
        INFO(name);
        const auto filter = make_filter(chain);
        const auto out = run(*filter, in);
        CHECK(std::isnan(out[3]));
        if (largest_pole_radius(chain) > 0.0)
            CHECK(std::any_of(out.end() - 400, out.end(), [](double y) { return std::isnan(y); }));
        filter->reset();
        CHECK(run(*filter, std::vector<double>(600, 0.0)).back() == 0.0);
    }
}

TEST_CASE("chain: a channel passes the stages that name it or none", "[filters]") {
    FilterChain chain{stage(MovingAverage{2}), stage(MovingAverage{3}), stage(MovingAverage{4})};
    chain[1].channels = {2};
    chain[2].channels = {3, 1};
    const auto points = [&](int channel) {
        std::vector<int> list;
        for (const FilterStage& each : chain_of_channel(chain, channel))
            list.push_back(std::get<MovingAverage>(each.design).points);
        return list;
    };
    CHECK(points(1) == std::vector<int>{2, 4});
    CHECK(points(2) == std::vector<int>{2, 3});
    CHECK(points(3) == std::vector<int>{2, 4});
    CHECK(points(4) == std::vector<int>{2});
}
