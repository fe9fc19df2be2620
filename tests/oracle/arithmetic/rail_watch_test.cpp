#include "oracle/arithmetic/rail_watch.hpp"

#include "oracle/arithmetic/declared.hpp"
#include "oracle/arithmetic/error_bound.hpp"
#include "oracle/arithmetic/twin.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/oracle/arithmetic/stimulus_words.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Judged {
    std::int64_t claimed = 0, exempt = 0, beyond = 0;
    std::optional<std::int64_t> lost, clipped;
    std::string first_beyond;
};

/// A twin against the declared reference, where the limits claim to hold.
Judged judged(const DescribedChain& chain, const std::vector<Code>& words) {
    Judged result;
    const ErrorBound bound = derive(chain);
    RailWatch watch(chain);
    const auto values = values_of_words(chain, words);
    std::vector<std::uint8_t> exempt(words.size());
    watch.add(values, exempt);
    const auto reference = run(*make_declared_filter(chain, 1.0), values);
    const auto response = twin_values(chain, words);
    for (std::size_t n = 0; n < words.size(); ++n) {
        if (exempt[n] != 0) {
            ++result.exempt;
            continue;
        }
        ++result.claimed;
        const double error = response[n] - reference[n];
        if (error >= bound.lower && error <= bound.upper) continue;
        if (result.beyond++ == 0) {
            result.first_beyond = "sample " + std::to_string(n) + ": " + std::to_string(response[n] / bound.step) +
                                  " against " + std::to_string(reference[n] / bound.step) + ", limits " +
                                  std::to_string(bound.lower / bound.step) + " .. " +
                                  std::to_string(bound.upper / bound.step);
        }
    }
    result.lost = watch.lost_from();
    result.clipped = watch.first_clip_index();
    return result;
}

}  // namespace

namespace {

struct Totals {
    std::int64_t claimed = 0, exempt = 0, clipped = 0, lost = 0;
};

Totals over_random_chains(std::uint64_t seed, int chains) {
    Random random(seed);
    INFO("seed " << seed);
    Totals totals;
    for (int trial = 0; trial < chains; ++trial) {
        const RandomChain chain = random_narrow_chain(random);
        if (!make_twin(chain.described)) continue;
        INFO("trial " << trial << ": " << text_of(chain));
        for (int run = 0; run < 2; ++run) {
            const Judged found = judged(chain.described, hard_words(random, chain.described, 300));
            INFO(found.first_beyond);
            REQUIRE(found.beyond == 0);
            totals.claimed += found.claimed;
            totals.exempt += found.exempt;
            totals.clipped += found.clipped.has_value();
            totals.lost += found.lost.has_value();
        }
    }
    return totals;
}

}  // namespace

TEST_CASE("rail watch: no twin exceeds its limits where they claim to hold", "[arithmetic]") {
    const Totals totals = over_random_chains(501, 400);
    // All of it must have happened: a watch that exempts everything would pass, too.
    CHECK(totals.claimed > 80000);
    CHECK(totals.exempt > 10000);
    CHECK(totals.clipped > 100);
    CHECK(totals.lost > 50);
}

TEST_CASE("rail watch: nor does one of 10,000", "[arithmetic][.long]") {
    const Totals totals = over_random_chains(502, 10000);
    WARN("claimed " << totals.claimed << ", exempt " << totals.exempt << ", runs that clipped " << totals.clipped
                    << ", lost " << totals.lost);
    CHECK(totals.claimed > 2000000);
}
