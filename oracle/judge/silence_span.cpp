#include "oracle/judge/silence_span.hpp"

#include <algorithm>
#include <vector>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/tail.hpp"

namespace halflsb {
namespace {

std::int64_t zeros_at_end(const Plan& plan, const Case& the_case) {
    constexpr std::int64_t block_samples = 4096;
    std::vector<Code> codes;
    std::vector<double> values;
    const std::int64_t length = the_case.stimulus->length_samples();
    for (std::int64_t end = length; end > 0;) {
        const std::int64_t begin = std::max<std::int64_t>(end - block_samples, 0);
        codes.resize(static_cast<std::size_t>(end - begin));
        values.resize(codes.size());
        fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, begin, codes);
        values_of(plan.signal.input, codes, values);
        for (std::size_t i = values.size(); i-- > 0;) {
            if (values[i] != 0.0) return length - begin - static_cast<std::int64_t>(i) - 1;
        }
        end = begin;
    }
    return length;
}

}  // namespace

std::optional<SilenceSpan> silence_span(const Plan& plan, const Case& the_case, int channel) {
    SilenceSpan span;
    const std::int64_t length = the_case.stimulus->length_samples();
    span.silent_sent = zeros_at_end(plan, the_case);
    if (span.silent_sent < length || the_case.start == Start::running) {
        const auto tail = tail_samples(plan, the_case, channel);
        if (!tail) return std::nullopt;
        span.tail_sent = *tail;
    }
    const CaseRates rates(plan, the_case);
    span.first_index =
        std::max(rates.returned(length - span.silent_sent + span.tail_sent), first_judged_sample(plan, the_case));
    const std::int64_t late = std::max(expected_lag_of(the_case), 0);
    span.judged_samples = std::max<std::int64_t>(returned_samples(plan, the_case) - span.first_index - late, 0);
    return span;
}

}  // namespace halflsb
