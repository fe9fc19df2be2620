// Words that drive a described filter hard, and what its twin returns of them.
#pragma once

#include <vector>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/arithmetic/exact_chain.hpp"
#include "oracle/arithmetic/twin.hpp"
#include "tests/oracle/arithmetic/port_values.hpp"
#include "tests/oracle/support.hpp"

namespace halflsb::testing {

inline std::int64_t top_of(const DescribedChain& chain) {
    return (std::int64_t{1} << (chain.stages.front().in.word.bits - 1)) - 1;
}

/// Noise, steps between the ends, the signs of its reversed impulse response, small noise, spikes on a ramp, half
/// level.
inline std::vector<Code> hard_words(Random& random, const DescribedChain& chain, std::size_t length) {
    const std::int64_t top = top_of(chain);
    std::vector<Code> words(length);
    const std::int64_t kind = random.whole(0, 5);
    const std::int64_t run = random.whole(1, 60), level = random.whole(1, 20);
    const auto response = impulse_response(exact_chain(chain).stages, length);
    for (std::size_t n = 0; n < length; ++n) {
        std::int64_t word = random.whole(-top - 1, top);
        if (kind == 1) word = (static_cast<std::int64_t>(n) / run) % 2 == 0 ? top : -top - 1;
        if (kind == 2) word = response[length - 1 - n] > 0.0 ? top : -top - 1;
        if (kind == 3) word = random.whole(-level, level);
        if (kind == 4) word = random.whole(0, 1) == 0 ? top : static_cast<std::int64_t>(n) % (top + 1);
        if (kind == 5) word = random.whole(-top / 2, top / 2);
        words[n] = static_cast<Code>(word);
    }
    return words;
}

/// The response of the twin as values of the chain's input, to codes as they travel.
inline std::vector<double> twin_values_of_codes(const DescribedChain& chain, const std::vector<Code>& codes) {
    std::vector<Code> returned(codes.size());
    std::vector<double> values(codes.size());
    make_twin(chain)->process(codes, returned);
    values_at(chain.stages.back().out, returned, values);
    return values;
}

inline std::vector<double> values_of_codes(const DescribedChain& chain, const std::vector<Code>& codes) {
    std::vector<double> values(codes.size());
    values_at(chain.stages.front().in, codes, values);
    return values;
}

/// Response of the twin less declared reference.
inline std::vector<double> errors_of_codes(const DescribedChain& chain, const std::vector<Code>& codes) {
    std::vector<double> errors = twin_values_of_codes(chain, codes), reference(codes.size());
    make_declared_filter(chain, 1.0)->process(values_of_codes(chain, codes), reference);
    for (std::size_t n = 0; n < codes.size(); ++n) errors[n] -= reference[n];
    return errors;
}

/// `words` have the mid-code taken away.
inline std::vector<double> twin_values(const DescribedChain& chain, std::vector<Code> words) {
    for (Code& word : words) word = static_cast<Code>(word + chain.stages.front().in.zero_code);
    return twin_values_of_codes(chain, words);
}

}  // namespace halflsb::testing
