// Twins from the words of a plan, and codes to feed them.
#pragma once

#include <catch2/catch.hpp>
#include <memory>
#include <string>
#include <vector>

#include "oracle/arithmetic/twin.hpp"
#include "tests/oracle/filters/make.hpp"

namespace halflsb::testing {

using Codes = std::vector<Code>;

inline FilterStage promised_stage(std::string_view kind, std::initializer_list<Given> given,
                                  std::initializer_list<Given> promised) {
    StageContext context;
    const auto arithmetic = make_arithmetic(words(promised));
    if (!arithmetic) FAIL(to_text(arithmetic.error()));
    context.arithmetic = *arithmetic;
    const auto made = make(kind, given, context);
    if (!made) FAIL(to_text(made.error()));
    return *made;
}

/// b0 b1 b2 a1 a2
using FiveNumbers = std::vector<double>;

inline FilterStage biquads(std::vector<FiveNumbers> sections, std::initializer_list<Given> promised) {
    return promised_stage("biquad-cascade", {{"sections", std::move(sections)}}, promised);
}

inline DescribedChain described_chain(const FilterChain& chain, std::string_view in = "q15",
                                      std::string_view out = "q15", double gain = 1.0) {
    const auto result = describe(chain, *sample_format(in), *sample_format(out), gain);
    if (result.problem) FAIL(to_text(result.problem->error));
    if (result.described->missing) FAIL(to_text(result.described->missing->error));
    return *result.described;
}

inline std::unique_ptr<Twin> twin_of(const FilterChain& chain, std::string_view in = "q15",
                                     std::string_view out = "q15", double gain = 1.0) {
    auto twin = make_twin(described_chain(chain, in, out, gain));
    REQUIRE(twin != nullptr);
    return twin;
}

inline Codes run(Twin& twin, const Codes& in) {
    Codes out(twin.outputs_for(in.size()));
    twin.process(in, out);
    return out;
}

inline Codes noise_codes(std::size_t length, std::uint64_t seed, std::int64_t lowest = -32768,
                         std::int64_t highest = 32767) {
    Random random(seed);
    Codes codes(length);
    for (Code& code : codes) code = static_cast<Code>(random.whole(lowest, highest));
    return codes;
}

/// Everything that tells one 16-bit arithmetic from another: full-scale and small noise, a slow square between the
/// rails, ramps of both signs, steps, impulses on ties and at the ends, a burst and then silence.
inline Codes telling_codes() {
    Codes codes = noise_codes(4000, 1);
    const auto append = [&](const Codes& more) { codes.insert(codes.end(), more.begin(), more.end()); };
    append(noise_codes(1000, 2, -12, 12));
    for (int i = 0; i < 1200; ++i) codes.push_back(i / 150 % 2 == 0 ? 32767 : -32768);
    for (int i = -32768; i < 32768; i += 61) codes.push_back(i);
    for (int i = 32767; i >= -32768; i -= 67) codes.push_back(i);
    for (const Code level : {100, 16384, -16384, -100, 0, 40, -40}) append(Codes(300, level));
    for (const Code height : {8192, -8192, 16384, -16384, 16383, 32767, -32768, 1, -1}) {
        codes.push_back(height);
        append(Codes(80, 0));
    }
    append(noise_codes(500, 3, -20000, 20000));
    append(Codes(1500, 0));
    return codes;
}

}  // namespace halflsb::testing
