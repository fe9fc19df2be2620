#include "oracle/judge/plan.hpp"

namespace halflsb {

std::string_view name_of(Start start) {
    switch (start) {
        case Start::reset:
            return "reset";
        case Start::flush:
            return "flush";
        case Start::running:
            break;
    }
    return "running";
}

double rate_hz_of(const Plan& plan, const Case& the_case) { return the_case.rate_hz.value_or(plan.signal.rate_hz); }

FilterChain chain_of(const Plan& plan, const Case& the_case, int channel) {
    FilterChain chain = chain_of_channel(the_case.filter ? *the_case.filter : plan.filter, channel);
    // Behind a flush, or on the run, the first sample of the case is not the first one after a reset.
    return the_case.start == Start::reset ? chain : from_rest(std::move(chain));
}

bool is_driven(const Case& the_case, int channel) { return !the_case.channel || *the_case.channel == channel; }

void fill_case_codes(const Plan& plan, const Case& the_case, std::int64_t first_index, std::span<Code> codes) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    if (channels == 1) {
        fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, first_index, codes);
        return;
    }
    const std::size_t instants = codes.size() / channels;
    std::vector<Code> one(instants);
    fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, first_index, one);
    const Code silence = zero_code(plan.signal.input);
    for (std::size_t i = 0; i < instants; ++i) {
        for (std::size_t c = 0; c < channels; ++c)
            codes[i * channels + c] = is_driven(the_case, static_cast<int>(c) + 1) ? one[i] : silence;
    }
}

}  // namespace halflsb
