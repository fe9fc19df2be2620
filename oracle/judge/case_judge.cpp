#include "oracle/judge/case_judge.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <cstdlib>

#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

constexpr std::size_t pass_block_samples = 4096;

const Rule* find_latency_rule(const Case& the_case) {
    const auto found = std::find_if(the_case.rules.begin(), the_case.rules.end(),
                                    [](const Rule& rule) { return std::holds_alternative<LatencyRule>(rule.kind); });
    return found == the_case.rules.end() ? nullptr : &*found;
}

bool has_response_rule(const Case& the_case) {
    return std::any_of(the_case.rules.begin(), the_case.rules.end(),
                       [](const Rule& rule) { return std::holds_alternative<ResponseRule>(rule.kind); });
}

RuleVerdict latency_verdict(const Rule& rule, int measured, int expected, Verdict verdict, std::string reason) {
    JudgedFigure figure{"latency",
                        static_cast<double>(measured),
                        static_cast<double>(expected),
                        std::nullopt,
                        "samples",
                        false,
                        verdict != Verdict::fail,
                        {}};
    if (verdict == Verdict::undecided) figure.value.reset();
    return {rule, verdict, "declared", {figure}, std::move(reason), std::nullopt};
}

std::string samples_text(int count) {
    return std::to_string(count) + (count == 1 || count == -1 ? " sample" : " samples");
}

}  // namespace

CaseJudge::CaseJudge(const Plan& plan, const Case& the_case)
    : plan_(plan),
      case_(the_case),
      latency_rule_(find_latency_rule(the_case)),
      expected_lag_(latency_rule_ == nullptr ? 0 : std::get<LatencyRule>(latency_rule_->kind).expected_samples),
      with_design_(has_response_rule(the_case)),
      reference_(plan, the_case, with_design_),
      pass_(plan, the_case, expected_lag_),
      lag_(lag_window_for(the_case.stimulus->length_samples()), expected_lag_),
      discrimination_(lag_window_for(the_case.stimulus->length_samples())),
      evidence_needed_(latency_evidence_ratio * latency_sigma(the_case, plan.signal) *
                       latency_sigma(the_case, plan.signal)) {}

void CaseJudge::add(std::span<const Code> response) {
    while (!response.empty()) {
        const auto part = response.first(std::min(response.size(), pass_block_samples));
        const ReferenceBlock block = reference_.next(part.size());
        pass_.add(block, part);
        response_values_.resize(part.size());
        values_of(plan_.signal.output, part, response_values_);
        lag_.add(block.declared, response_values_);
        // The sums only grow: once there is evidence enough, more changes nothing.
        if (discrimination_.smallest() < evidence_needed_) discrimination_.add(block.declared);
        samples_ += static_cast<std::int64_t>(part.size());
        response = response.subspan(part.size());
    }
}

Outcome<CaseJudgement> CaseJudge::finish(const ResponseReplay& replay) {
    CaseJudgement judgement;
    judgement.latency_told = latency_rule_ != nullptr && discrimination_.smallest() >= evidence_needed_;
    std::vector<RuleVerdict> verdicts = pass_.verdicts();
    std::optional<RuleVerdict> latency;
    if (!judgement.latency_told) {
        if (latency_rule_ != nullptr && !std::get<LatencyRule>(latency_rule_->kind).implicit) {
            latency = latency_verdict(*latency_rule_, 0, expected_lag_, Verdict::undecided,
                                      "this stimulus cannot tell the latency");
        }
    } else {
        const LagFigures lags = lag_.value();
        const int measured = lags.best_lag;
        if (!std::isfinite(lags.residual_at(measured))) {
            // One NaN or infinity makes every lag equally bad: none of them is right.
            latency = latency_verdict(*latency_rule_, measured, expected_lag_, Verdict::undecided,
                                      "the response holds a value that is not a finite number, so it fits at no lag");
        } else if (measured == expected_lag_) {
            latency = latency_verdict(*latency_rule_, measured, expected_lag_, Verdict::pass, {});
        } else {
            AlignedPass second(plan_, case_, measured);
            ReferenceSource reference(plan_, case_, with_design_);
            std::vector<Code> codes;
            for (std::int64_t first = 0; first < samples_; first += static_cast<std::int64_t>(codes.size())) {
                codes.resize(static_cast<std::size_t>(std::min<std::int64_t>(pass_block_samples, samples_ - first)));
                if (auto read = replay(first, codes); !read) return read.error();
                second.add(reference.next(codes.size()), codes);
            }
            const bool clear = lags.residual_at(measured) * 100.0 <= lags.residual_at(expected_lag_);
            if (clear || (second.has_error_rules() && second.error_rules_pass())) {
                latency =
                    latency_verdict(*latency_rule_, measured, expected_lag_, Verdict::fail,
                                    "the response is " + samples_text(measured) + " behind the reference" +
                                        (std::abs(measured) == lags.window ? ", or more: the window ends there" : ""));
                verdicts = second.verdicts();
                for (RuleVerdict& verdict : verdicts) {
                    const std::string note = "judged at the measured lag of " + samples_text(measured);
                    verdict.reason = verdict.reason.empty() ? note : note + "; " + verdict.reason;
                }
            } else {
                latency = latency_verdict(*latency_rule_, measured, expected_lag_, Verdict::undecided,
                                          "the response fits at no lag of -" + std::to_string(lags.window) + " to " +
                                              std::to_string(lags.window) + " samples");
            }
        }
    }
    // Back into the order of the case's rules.
    std::size_t next = 0;
    for (const Rule& rule : case_.rules) {
        if (&rule == latency_rule_) {
            if (latency) judgement.rules.push_back(*latency);
        } else if (!std::holds_alternative<LatencyRule>(rule.kind)) {
            judgement.rules.push_back(std::move(verdicts[next++]));
        }
    }
    return judgement;
}

std::int64_t latency_evidence_samples(const FilterChain& filter) {
    std::uint64_t operations_a_sample = 2 * lag_window_samples + 1;
    for (const FilterStage& stage : filter) {
        if (const auto* fir = std::get_if<Fir>(&stage.design)) operations_a_sample += fir->taps.size();
        if (const auto* cascade = std::get_if<BiquadCascade>(&stage.design))
            operations_a_sample += 5 * cascade->sections.size();
    }
    constexpr std::uint64_t operations = std::uint64_t{1} << 30, fewest = std::uint64_t{1} << 14,
                            most = std::uint64_t{1} << 22;
    return static_cast<std::int64_t>(std::clamp(std::bit_floor(operations / operations_a_sample), fewest, most));
}

LatencyEvidence latency_evidence(const Plan& plan, const Case& the_case) {
    const std::int64_t length = std::min(the_case.stimulus->length_samples(), latency_evidence_samples(plan.filter));
    const double sigma = latency_sigma(the_case, plan.signal);
    LagDiscrimination discrimination(lag_window_for(length));
    ReferenceSource reference(plan, the_case, false);
    LatencyEvidence evidence;
    for (std::int64_t first = 0; first < length && !evidence.can_tell;
         first += static_cast<std::int64_t>(pass_block_samples)) {
        const auto count = std::min<std::int64_t>(static_cast<std::int64_t>(pass_block_samples), length - first);
        discrimination.add(reference.next(static_cast<std::size_t>(count)).declared);
        evidence.smallest_ratio = discrimination.smallest() / (sigma * sigma);
        evidence.can_tell = evidence.smallest_ratio >= latency_evidence_ratio;
    }
    evidence.hardest_lag = discrimination.hardest_lag();
    return evidence;
}

}  // namespace halflsb
