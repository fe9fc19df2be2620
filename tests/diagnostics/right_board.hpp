// A board that does what the plan says.
#pragma once

#include <vector>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/judge/derived_limits.hpp"

namespace halflsb::diagnostics {

/// What it returns in the first case.
inline std::vector<Code> right_response(const Plan& plan) {
    const Case& the_case = plan.cases.front();
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    const auto length = static_cast<std::size_t>(the_case.stimulus->length_samples());
    std::vector<Code> codes(length * channels), all(length * channels);
    fill_case_codes(plan, the_case, 0, codes);
    for (std::size_t c = 0; c < channels; ++c) {
        std::vector<Code> one(length);
        std::vector<double> in(length), out(length);
        for (std::size_t n = 0; n < length; ++n) one[n] = codes[n * channels + c];
        values_of(plan.signal.input, one, in);
        if (plan.filter_is_unknown) {
            out = in;
        } else {
            make_declared_filter(*described_channel(plan, the_case, static_cast<int>(c) + 1), 1.0)->process(in, out);
        }
        for (std::size_t n = 0; n < length; ++n)
            all[n * channels + c] = code_of(plan.signal.output, out[n], Rounding::half_up);
    }
    return all;
}

}  // namespace halflsb::diagnostics
