#include "oracle/judge/sensitivity.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <memory>
#include <set>
#include <utility>

#include "oracle/arithmetic/plausible_changes.hpp"
#include "oracle/arithmetic/twin.hpp"
#include "oracle/filters/channel_stages.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/derived_limits.hpp"

namespace halflsb {
namespace {

/// What a board with the plan's arithmetic returns, codes of an instant adjacent; empty where there is no twin.
std::vector<Code> twin_response(const Plan& plan, const Case& the_case, std::span<const Code> sent) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    const std::size_t instants = sent.size() / channels;
    const auto returned =
        static_cast<std::size_t>(CaseRates(plan, the_case).returned(static_cast<std::int64_t>(instants)));
    std::vector<Code> response(returned * channels), in(instants), out(returned);
    for (std::size_t c = 0; c < channels; ++c) {
        const auto described = described_channel(plan, the_case, static_cast<int>(c) + 1);
        const auto twin = described ? make_twin(*described) : nullptr;
        if (twin == nullptr) return {};
        for (std::size_t n = 0; n < instants; ++n) in[n] = sent[n * channels + c];
        twin->process(in, out);
        for (std::size_t n = 0; n < returned; ++n) response[n * channels + c] = out[n];
    }
    return response;
}

/// A board on paper: what it returns for what a case sends.
using PaperBoard = std::function<std::vector<Code>(const Case&, std::span<const Code> sent)>;

/// What the board returns for the first `length` instants of the case that this one is held against.
BaseResponse base_of(const Plan& plan, const Case& the_case, std::int64_t length, const PaperBoard& board) {
    BaseResponse base;
    if (!the_case.companion) return base;
    const auto found = std::find_if(plan.cases.begin(), plan.cases.end(),
                                    [&](const Case& other) { return other.name == the_case.companion->base; });
    if (found == plan.cases.end()) return base;
    const auto channels = static_cast<std::int64_t>(plan.signal.channels);
    std::vector<Code> sent(static_cast<std::size_t>(length * channels));
    fill_case_codes(plan, *found, 0, sent);
    const auto response = std::make_shared<const std::vector<Code>>(board(*found, sent));
    // Of a case that is cut nothing beyond is asked for.
    base.samples = returned_samples(plan, *found);
    base.read = [response, channels](std::int64_t first, std::span<Code> codes) -> Outcome<void> {
        std::copy_n(response->begin() + first * channels, codes.size(), codes.begin());
        return {};
    };
    return base;
}

/// The kind of the first rule that fails on this response; "" when all pass.
std::string failing_rule(const Plan& plan, const Case& the_case, const std::vector<Code>& response, BaseResponse base) {
    CaseJudge judge(plan, the_case, false, std::move(base));
    judge.add(response);
    const auto channels = static_cast<std::int64_t>(plan.signal.channels);
    const auto judgement = judge.finish([&](std::int64_t first, std::span<Code> codes) -> Outcome<void> {
        std::copy_n(response.begin() + first * channels, codes.size(), codes.begin());
        return {};
    });
    if (!judgement) return "";
    for (const RuleVerdict& verdict : judgement->rules) {
        if (verdict.verdict == Verdict::fail) return std::string(kind_name(verdict.rule));
    }
    return "";
}

/// The case as it is looked at: without a baseline.
Case case_to_look_at(const Case& whole) {
    Case the_case = whole;
    std::erase_if(the_case.rules, [](const Rule& rule) { return std::holds_alternative<UnchangedRule>(rule.kind); });
    return the_case;
}

/// What a board returns that has the change.
std::vector<Code> changed_response(const Plan& plan, const Case& the_case, const ArithmeticChange& change,
                                   std::span<const Code> sent) {
    Plan board;
    board.signal = plan.signal;
    board.filter = the_case.filter ? *the_case.filter : plan.filter;
    board.filter[change.stage].arithmetic = change.arithmetic;
    Case on_board = the_case;
    on_board.filter.reset();
    return twin_response(board, on_board, sent);
}

/// Of every channel, those of a stage that several pass once; `stage` counts in the plan.
std::vector<ArithmeticChange> changes_of(const Plan& plan) {
    std::vector<ArithmeticChange> all;
    std::set<std::pair<std::size_t, std::string>> seen;
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        const std::vector<std::size_t> passed = stages_of_channel(plan.filter, channel);
        for (ArithmeticChange& change : plausible_changes(chain_of_channel(plan.filter, channel), plan.signal.input,
                                                          plan.signal.output, plan.signal.output_per_input)) {
            change.stage = passed[change.stage];
            if (plan.filter.size() > 1) change.name = "stage " + std::to_string(change.stage + 1) + ": " + change.name;
            if (seen.insert({change.stage, change.name}).second) all.push_back(std::move(change));
        }
    }
    return all;
}

void count_differences(const Plan& plan, std::span<const Code> a, std::span<const Code> b, ChangeSeen& change) {
    const bool has_lsb = plan.signal.output.has_lsb();
    for (std::size_t i = 0; i < a.size(); ++i) {
        if (a[i] == b[i]) continue;
        ++change.differing;
        const double difference = has_lsb ? static_cast<double>(a[i]) - static_cast<double>(b[i])
                                          : value_of(plan.signal.output, a[i]) - value_of(plan.signal.output, b[i]);
        change.largest_lsb = std::max(change.largest_lsb, std::fabs(difference));
    }
}

}  // namespace

std::int64_t operations_a_sample(const FilterChain& filter) {
    std::int64_t operations = 1;
    for (const FilterStage& stage : filter) {
        if (const auto* fir = std::get_if<Fir>(&stage.design)) operations += std::ssize(fir->taps);
        if (const auto* fewer = std::get_if<FirDecimator>(&stage.design)) operations += std::ssize(fewer->taps);
        if (const auto* more = std::get_if<FirInterpolator>(&stage.design)) operations += std::ssize(more->taps);
        if (const auto* median = std::get_if<Median>(&stage.design)) operations += median->points;
    }
    return operations;
}

std::int64_t sensitivity_samples(const FilterChain& filter) {
    constexpr std::int64_t operations = std::int64_t{1} << 27, most = std::int64_t{1} << 17;
    return std::min(most, operations / operations_a_sample(filter));
}

Sensitivity sensitivity(const Plan& plan, const std::vector<std::size_t>& cases, const std::function<bool()>& go_on) {
    Sensitivity result;
    if (plan.filter_is_unknown) {
        result.unknown = "the filter is unknown";
        return result;
    }
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        const auto described = describe(chain_of_channel(plan.filter, channel), plan.signal.input, plan.signal.output,
                                        plan.signal.output_per_input)
                                   .described;
        if (described && !described->missing) continue;
        result.unknown = described ? described->missing->error.problem : "the arithmetic cannot be";
        return result;
    }
    const std::vector<ArithmeticChange> changes = changes_of(plan);
    for (const ArithmeticChange& change : changes)
        result.changes.push_back({change.name, ChangeSeen::Answer::same, {}, {}, 0, 0.0});
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    result.most_samples = sensitivity_samples(plan.filter);
    for (const std::size_t index : cases) {
        if (!go_on()) break;
        const Case the_case = case_to_look_at(plan.cases[index]);
        const CaseRates rates(plan, the_case);
        const std::int64_t length = std::min(the_case.stimulus->length_samples(),
                                             rates.cycles_within(result.most_samples) * rates.cycle().inputs);
        result.is_cut = result.is_cut || length < the_case.stimulus->length_samples();
        result.samples += length;
        std::vector<Code> sent(static_cast<std::size_t>(length) * channels);
        fill_case_codes(plan, the_case, 0, sent);
        const std::vector<Code> declared = twin_response(plan, the_case, sent);
        if (result.failing_rule.empty()) {
            const PaperBoard board = [&](const Case& other, std::span<const Code> codes) {
                return twin_response(plan, other, codes);
            };
            result.failing_rule =
                declared.empty() ? "" : failing_rule(plan, the_case, declared, base_of(plan, the_case, length, board));
            if (!result.failing_rule.empty()) result.failing_case = the_case.name;
        }
        for (std::size_t i = 0; i < changes.size(); ++i) {
            ChangeSeen& seen = result.changes[i];
            if (seen.answer == ChangeSeen::Answer::seen) continue;
            if (!go_on()) return result;
            const std::vector<Code> response = changed_response(plan, the_case, changes[i], sent);
            if (response.empty() || response == declared) continue;
            count_differences(plan, response, declared, seen);
            const PaperBoard board = [&](const Case& other, std::span<const Code> codes) {
                return changed_response(plan, other, changes[i], codes);
            };
            seen.rule = failing_rule(plan, the_case, response, base_of(plan, the_case, length, board));
            seen.answer = seen.rule.empty() ? ChangeSeen::Answer::unseen : ChangeSeen::Answer::seen;
            if (!seen.rule.empty()) seen.case_name = the_case.name;
        }
    }
    return result;
}

}  // namespace halflsb
