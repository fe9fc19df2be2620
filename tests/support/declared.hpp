// The declared reference of a chain, as the judge has it.
#pragma once

#include <catch2/catch.hpp>
#include <memory>

#include "oracle/arithmetic/declared.hpp"

namespace halflsb::test {

inline std::unique_ptr<Filter> declared_filter(const FilterChain& design, const SampleFormat& input,
                                               const SampleFormat& output, double gain) {
    const auto described = describe(design, input, output, gain).described;
    REQUIRE(described);
    return make_declared_filter(*described, gain);
}

}  // namespace halflsb::test
