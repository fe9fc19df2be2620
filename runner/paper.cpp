#include "runner/paper.hpp"

#include <algorithm>
#include <cmath>
#include <complex>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/measure/response.hpp"
#include "runner/wire/wire_cost.hpp"

namespace halflsb {
namespace {

/// Where the gain first falls 3 dB below that at 0 Hz, by bisection between two points of a fine grid.
std::optional<double> corner_hz(const FilterChain& chain, double rate_hz) {
    const double wanted_db = gain_db(response_at(chain, 0.0)) - 10.0 * std::log10(2.0);
    if (!std::isfinite(wanted_db)) return std::nullopt;
    constexpr int steps = 4096;
    for (int step = 1; step <= steps; ++step) {
        double high = 0.5 * step / steps;
        if (gain_db(response_at(chain, high)) > wanted_db) continue;
        double low = 0.5 * (step - 1) / steps;
        for (int halving = 0; halving < 60; ++halving) {
            const double middle = (low + high) / 2.0;
            (gain_db(response_at(chain, middle)) > wanted_db ? low : high) = middle;
        }
        return high * rate_hz;
    }
    return std::nullopt;
}

PredictedFilter predict_filter(const FilterChain& chain, double rate_hz) {
    const FilterChain declared = declared_chain(chain);
    PredictedFilter filter;
    filter.stages = chain.size();
    filter.largest_pole_radius = largest_pole_radius(chain);
    filter.l1_norm = l1_norm(chain);
    filter.dc_gain_db = gain_db(response_at(chain, 0.0));
    filter.corner_hz = corner_hz(chain, rate_hz);
    constexpr int per_decade = 6, points = 19;
    for (int point = -1; point < points; ++point) {
        const double cycles_per_sample =
            point < 0 ? 0.0 : 0.5 * std::pow(10.0, static_cast<double>(point - points + 1) / per_decade);
        const std::complex<double> design = response_at(chain, cycles_per_sample);
        constexpr double degrees = 180.0 / 3.14159265358979323846;
        filter.response.push_back(
            {cycles_per_sample * rate_hz, cycles_per_sample, gain_db(design),
             gain_db(response_at(declared, cycles_per_sample)),
             std::abs(design) > 0.0 ? std::optional<double>(std::arg(design) * degrees) : std::nullopt});
    }
    return filter;
}

}  // namespace

double wire_seconds_of(const Plan& plan, const Case& the_case, const Rig& rig) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    const std::int64_t before = the_case.start == Start::flush ? the_case.start_samples : 0;
    return wire_seconds(
        wire_cost(the_case.stimulus->length_samples() + before, rig.block_samples,
                  plan.signal.input.word_bytes() * channels, plan.signal.output.word_bytes() * channels),
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

Prediction predict(const Plan& plan, const std::vector<std::size_t>& selected, const Rig* rig) {
    Prediction prediction;
    prediction.title = plan.title;
    prediction.plan_file = plan.file;
    prediction.signal = plan.signal;
    if (!plan.filter_is_unknown) {
        const bool differ = std::any_of(plan.filter.begin(), plan.filter.end(),
                                        [](const FilterStage& stage) { return !stage.channels.empty(); });
        for (int channel = 1; channel <= (differ ? plan.signal.channels : 1); ++channel) {
            prediction.filters.push_back(predict_filter(chain_of_channel(plan.filter, channel), plan.signal.rate_hz));
            for (int other = channel; other <= (differ ? channel : plan.signal.channels); ++other)
                prediction.filters.back().channels.push_back(other);
        }
    }
    if (rig != nullptr) prediction.wire_s = 0.0;
    for (const std::size_t index : selected) {
        const Case& the_case = plan.cases[index];
        PredictedCase predicted{the_case.name, the_case.stimulus->length_samples(), false, std::nullopt};
        predicted.latency_told = !plan.filter_is_unknown && latency_evidence(plan, the_case).can_tell;
        if (rig != nullptr) {
            predicted.wire_s = wire_seconds_of(plan, the_case, *rig);
            *prediction.wire_s += *predicted.wire_s;
        }
        prediction.cases.push_back(std::move(predicted));
    }
    return prediction;
}

}  // namespace halflsb
