#include "runner/paper.hpp"

#include "oracle/filters/channel_stages.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/case_rates.hpp"
#include "runner/case_cost.hpp"
#include "runner/paper_arithmetic.hpp"
#include "runner/paper_filter.hpp"

namespace halflsb {

double wire_seconds_of(const Plan& plan, const Case& the_case, const Rig& rig) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    const RateCycle rate = rate_cycle_of(plan);
    return wire_seconds(
        case_cost(the_case, rig.block_samples,
                  {plan.signal.input.word_bytes() * channels, plan.signal.output.word_bytes() * channels,
                   static_cast<int>(rate.outputs), static_cast<int>(rate.inputs)}),
        rig.baud);
}

CaseList list_cases(const Plan& plan, const std::vector<std::size_t>& selected, const Rig* rig) {
    CaseList list;
    if (rig != nullptr) list.wire_s = 0.0;
    for (const std::size_t index : selected) {
        const Case& the_case = plan.cases[index];
        ListedCase listed{index + 1,
                          the_case.name,
                          the_case.labels,
                          the_case.channel,
                          the_case.stimulus->length_samples(),
                          the_case.start,
                          the_case.start_samples,
                          0.0,
                          std::nullopt};
        const std::int64_t before = the_case.start == Start::flush ? the_case.start_samples : 0;
        listed.signal_s = static_cast<double>(listed.samples + before) / rate_hz_of(plan, the_case);
        if (rig != nullptr) {
            listed.wire_s = wire_seconds_of(plan, the_case, *rig);
            *list.wire_s += *listed.wire_s;
        }
        list.samples += listed.samples;
        list.signal_s += listed.signal_s;
        list.cases.push_back(std::move(listed));
    }
    return list;
}

namespace {

void add_filters(const Plan& plan, const std::vector<std::size_t>& selected, const std::function<bool()>& go_on,
                 Prediction& prediction) {
    const Signal& signal = plan.signal;
    const bool differ = channels_differ(plan.filter);
    for (int channel = 1; channel <= (differ ? signal.channels : 1) && go_on(); ++channel) {
        const FilterChain chain = chain_of_channel(plan.filter, channel);
        const auto described = describe(chain, signal.input, signal.output, signal.output_per_input).described;
        PredictedFilter filter = predict_filter(chain, described ? &*described : nullptr, signal);
        if (described) filter.arithmetic = predict_arithmetic(plan, *described, channel, selected, go_on);
        for (int other = channel; other <= (differ ? channel : signal.channels); ++other)
            filter.channels.push_back(other);
        prediction.filters.push_back(std::move(filter));
    }
}

}  // namespace

Prediction predict(const Plan& plan, const std::vector<std::size_t>& selected, const Rig* rig,
                   const std::function<bool()>& go_on) {
    Prediction prediction;
    prediction.title = plan.title;
    prediction.plan_file = plan.file;
    prediction.signal = plan.signal;
    if (!plan.filter_is_unknown) add_filters(plan, selected, go_on, prediction);
    if (!plan.filter_is_unknown && go_on()) prediction.sight = predict_sight(plan, selected, go_on);
    if (rig != nullptr) prediction.wire_s = 0.0;
    for (const std::size_t index : selected) {
        if (!go_on()) break;
        const Case& the_case = plan.cases[index];
        PredictedCase predicted{the_case.name, the_case.stimulus->length_samples(), false, std::nullopt};
        predicted.latency_told =
            !plan.filter_is_unknown && !the_case.companion && latency_evidence(plan, the_case).can_tell;
        if (rig != nullptr) {
            predicted.wire_s = wire_seconds_of(plan, the_case, *rig);
            *prediction.wire_s += *predicted.wire_s;
        }
        prediction.cases.push_back(std::move(predicted));
    }
    return prediction;
}

}  // namespace halflsb
