// Sums over paths, against sums written out over long impulse responses.
#include "oracle/arithmetic/path_sums.hpp"

#include <cmath>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;
using Catch::Matchers::WithinAbs;
using Catch::Matchers::WithinRel;

namespace {

constexpr std::size_t long_enough = 6000;

FilterChain chain_of(std::vector<FilterDesign> designs) {
    FilterChain chain;
    for (FilterDesign& design : designs) chain.push_back(FilterStage{std::move(design), std::nullopt});
    return chain;
}

/// All of PathSums, sample by sample.
PathSums by_hand(const FilterChain& path, std::int64_t samples, std::size_t lags) {
    const auto record = static_cast<std::size_t>(samples);
    const std::vector<double> h = impulse_response(path, long_enough + record);
    PathSums sums;
    std::vector<double> steps;
    for (const double value : h) {
        (value > 0.0 ? sums.positive : sums.negative) += value;
        steps.push_back((steps.empty() ? 0.0 : steps.back()) + value);
    }
    for (std::size_t lag = 0; lag < lags; ++lag) {
        double sum = 0.0;
        for (std::size_t n = 0; n + lag < h.size(); ++n) sum += h[n] * h[n + lag];
        sums.autocorrelation.push_back(sum);
    }
    for (std::size_t n = 0; n < record; ++n) {
        (steps[n] > 0.0 ? sums.step_positive : sums.step_negative) += steps[n] / static_cast<double>(samples);
        double behind = 0.0;
        for (std::size_t k = n + 1; k < h.size(); ++k) behind += std::fabs(h[k]);
        sums.past_rms += behind * behind / static_cast<double>(samples);
    }
    sums.past_rms = std::sqrt(sums.past_rms);
    for (std::size_t before = 1; before <= long_enough; ++before) {
        double weight = 0.0;
        for (std::size_t n = 0; n < record; ++n) weight += h[n + before];
        (weight > 0.0 ? sums.past_positive : sums.past_negative) += weight / static_cast<double>(samples);
    }
    return sums;
}

void check_same(const FilterChain& path, std::int64_t samples) {
    INFO(samples << " samples");
    const PathSums sums = path_sums(path, samples, 6, true), expected = by_hand(path, samples, 6);
    CHECK_THAT(sums.positive, WithinRel(expected.positive, 1e-9));
    CHECK_THAT(sums.negative, WithinAbs(expected.negative, 1e-9 * expected.positive));
    CHECK_THAT(sums.step_positive, WithinRel(expected.step_positive, 1e-9));
    CHECK_THAT(sums.step_negative, WithinAbs(expected.step_negative, 1e-9));
    CHECK_THAT(sums.past_positive, WithinAbs(expected.past_positive, 1e-9));
    CHECK_THAT(sums.past_negative, WithinAbs(expected.past_negative, 1e-9));
    CHECK_THAT(sums.past_rms, WithinAbs(expected.past_rms, 1e-9));
    REQUIRE(sums.autocorrelation.size() == 6);
    for (std::size_t lag = 0; lag < 6; ++lag)
        CHECK_THAT(sums.autocorrelation[lag], WithinAbs(expected.autocorrelation[lag], 1e-9));
}

}  // namespace

TEST_CASE("path sums: of a section, a fir and both, with their past, as written out", "[arithmetic]") {
    const BiquadCascade section{{{1.0, 0.0, 0.0, -1.7, 0.8}}};
    for (const std::int64_t samples : {1, 2, 7, 100, 3000}) {
        check_same(chain_of({section}), samples);
        check_same(chain_of({Fir{{1.0, -1.0, 0.25}}}), samples);
        check_same(chain_of({Fir{{1.0, -1.0}}, section}), samples);
    }
}

TEST_CASE("path sums: of a comb are summed without its zeros, and are the same", "[arithmetic]") {
    for (const std::int64_t samples : {1, 3, 4, 5, 50, 1001}) {
        check_same(chain_of({Comb{4, 1.0, 0.0, -0.9}}), samples);
        check_same(chain_of({Comb{4, 1.0, 0.5, 0.9}}), samples);
        check_same(chain_of({Comb{6, 1.0, 0.0, -0.5}, Fir{{0.5}}, Comb{9, 0.5, 0.5, 0.7}}), samples);
        check_same(chain_of({Comb{6, 1.0, 0.0, -0.5}, Fir{{0.5, 0.5}}}), samples);
    }
}

TEST_CASE("path sums: a comb that rings for 27 million samples is summed to its end", "[arithmetic]") {
    // 1 / (1 - 0.999) in a sum of positive samples.
    const FilterChain path = chain_of({Comb{1000, 1.0, 0.0, -0.999}});
    CHECK_THAT(path_sums(path, 4096, 1).l1(), WithinRel(1000.0, 1e-9));
    CHECK_THAT(l1_norm(path), WithinRel(1000.0, 1e-9));
    // 4096 samples: four steps of 1000, and 96 samples of the fifth.
    const double steps = 1.0 + 1.999 + 2.997001 + 3.994003999 + 0.096 * 4.990009995001;
    CHECK_THAT(path_sums(path, 4096, 1).step_positive, WithinRel(1000.0 * steps / 4096.0, 1e-9));
}

TEST_CASE("path sums: without being asked for the past is not summed", "[arithmetic]") {
    const PathSums sums = path_sums(chain_of({Comb{4, 1.0, 0.0, -0.9}}), 10, 1);
    CHECK((sums.past_positive == 0.0 && sums.past_negative == 0.0 && sums.past_rms == 0.0));
}
