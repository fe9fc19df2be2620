// What a plan leaves open of its arithmetic, and the ways to say it.
#pragma once

#include <functional>
#include <vector>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

/// One way to say it.
struct WordChoice {
    double price_bits = 0.0;
    std::function<void(FilterStage&)> say;
};

/// A word of one stage, or words that hang together. The first choice is the cheapest: mostly to leave them out.
struct OpenWord {
    std::size_t stage = 0;
    std::vector<WordChoice> choices;
};

/// Of a chain of one channel, stage by stage; what the plan says is not among them.
std::vector<OpenWord> open_words(const FilterChain& chain, const Signal& signal);

}  // namespace halflsb
