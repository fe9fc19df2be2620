#include "oracle/judge/channel_judge.hpp"

#include <algorithm>
#include <cmath>
#include <cstdlib>

#include "oracle/judge/latency_sigma.hpp"
#include "oracle/judge/rule_kinds.hpp"

namespace halflsb {
namespace {

constexpr std::size_t look_every_samples = 4096;

const Rule* find_latency_rule(const Case& the_case) {
    const auto found = std::find_if(the_case.rules.begin(), the_case.rules.end(),
                                    [](const Rule& rule) { return std::holds_alternative<LatencyRule>(rule.kind); });
    return found == the_case.rules.end() ? nullptr : &*found;
}

double evidence_needed(const Case& the_case, const Signal& signal, const DerivedLimits& derived) {
    const double sigma = latency_sigma(the_case, signal, derived);
    return latency_evidence_ratio * sigma * sigma;
}

std::string samples_text(int count) {
    return std::to_string(count) + (count == 1 || count == -1 ? " sample" : " samples");
}

}  // namespace

ChannelJudge::ChannelJudge(const Plan& plan, const Case& the_case, int channel, bool wants_plots)
    : judged_{plan, the_case, channel, asked_limits(plan, the_case, channel), 0, wants_plots},
      latency_rule_(find_latency_rule(the_case)),
      expected_lag_(expected_lag_of(the_case)),
      wanted_(wanted_references(the_case, channel)),
      reference_(plan, the_case, channel, wanted_),
      pass_(judged_, expected_lag_),
      window_(lag_window_of(plan, the_case)),
      lag_(window_, expected_lag_, first_lag_sample(plan, the_case, window_)),
      discrimination_(window_, first_lag_sample(plan, the_case, window_)),
      evidence_needed_(evidence_needed(the_case, plan.signal, judged_.derived)) {}

void ChannelJudge::add(std::span<const Code> sent, std::span<const Code> response) {
    const ReferenceBlock block = reference_.next(sent);
    pass_.add(block, response);
    if (!judged_.is_driven() || latency_rule_ == nullptr) return;
    response_values_.resize(response.size());
    values_of(judged_.plan.signal.output, response, response_values_);
    lag_.add(block.declared, response_values_);
    for (const Code code : response) {
        if (!first_code_) first_code_ = code;
        response_moves_ = response_moves_ || code != *first_code_;
    }
    // The sums only grow: once there is evidence enough, more changes nothing. To look costs a stretch of sums, so
    // small blocks do not look each time.
    if (has_evidence_) return;
    discrimination_.add(block.declared);
    unlooked_samples_ += response.size();
    if (unlooked_samples_ < look_every_samples) return;
    unlooked_samples_ = 0;
    has_evidence_ = discrimination_.smallest() >= evidence_needed_;
}

bool ChannelJudge::latency_told() const {
    return judged_.is_driven() && latency_rule_ != nullptr && std::abs(expected_lag_) <= window_ && response_moves_ &&
           (has_evidence_ || discrimination_.smallest() >= evidence_needed_);
}

bool ChannelJudge::is_decided() const {
    const bool latency_is_open = judged_.is_driven() && latency_rule_ != nullptr && !has_evidence_;
    return !latency_is_open && pass_.is_decided();
}

bool ChannelJudge::begin_second_pass() {
    pass_.finish();
    if (!latency_told()) return false;
    lags_ = lag_.value();
    const int measured = lags_->best_lag;
    if (!std::isfinite(lags_->residual_at(measured)) || measured == expected_lag_) return false;
    second_.emplace(SecondPass{AlignedPass(judged_, measured),
                               ReferenceSource(judged_.plan, judged_.the_case, judged_.channel, wanted_)});
    return true;
}

void ChannelJudge::add_again(std::span<const Code> sent, std::span<const Code> response) {
    second_->pass.add(second_->reference.next(sent), response);
}

void ChannelJudge::end_second_pass() {
    if (second_) second_->pass.finish();
}

ChannelJudge::Latency ChannelJudge::latency_found() const {
    if (!lags_) return Latency::not_told;
    const int measured = lags_->best_lag;
    // One NaN or infinity makes every lag equally bad: none of them is right.
    if (!std::isfinite(lags_->residual_at(measured))) return Latency::not_finite;
    if (measured == expected_lag_) return Latency::as_expected;
    // Codes that wrap or clip can fit another lag better by squares; equal to the bit they fit where they are.
    if (pass_.passes<ExactRule>(nullptr)) return Latency::as_expected;
    const bool is_clear = lags_->residual_at(measured) * 100.0 <= lags_->residual_at(expected_lag_);
    // A derived limit that says nothing of some samples is met by much: that is no evidence of a lag.
    const RailWatch* const rails = second_->reference.rails();
    const bool holds_throughout = rails == nullptr || !rails->first_unsafe_index();
    const bool meets_limits = holds_throughout && second_->pass.passes<ErrorRule>(rails);
    return is_clear || meets_limits ? Latency::other : Latency::fits_nowhere;
}

std::optional<RuleVerdict> ChannelJudge::latency_verdict(const Rule& rule) const {
    if (!judged_.is_driven()) return std::nullopt;
    RuleVerdict verdict{rule, Verdict::undecided, "declared", {}, {}, std::nullopt};
    JudgedFigure figure{
        "latency", std::nullopt, static_cast<double>(expected_lag_), std::nullopt, "samples", false, Verdict::undecided,
        {}};
    switch (latency_found()) {
        case Latency::not_told:
            if (std::get<LatencyRule>(rule.kind).implicit) return std::nullopt;
            verdict.reason = "this stimulus cannot tell the latency";
            break;
        case Latency::not_finite:
            verdict.reason = "the response holds a value that is not a finite number, so it fits at no lag";
            break;
        case Latency::as_expected:
            verdict.verdict = figure.verdict = Verdict::pass;
            figure.value = expected_lag_;
            break;
        case Latency::other:
            verdict.verdict = Verdict::fail;
            verdict.reason = "the response is " + samples_text(lags_->best_lag) + " behind the reference" +
                             (std::abs(lags_->best_lag) == lags_->window ? ", or more: the window ends there" : "");
            figure.value = lags_->best_lag;
            figure.verdict = Verdict::fail;
            break;
        case Latency::fits_nowhere:
            verdict.reason = "the response fits at no lag of -" + std::to_string(lags_->window) + " to " +
                             std::to_string(lags_->window) + " samples";
            break;
    }
    verdict.figures.push_back(std::move(figure));
    add_fraction(rule, verdict);
    return verdict;
}

void ChannelJudge::add_fraction(const Rule& rule, RuleVerdict& verdict) const {
    const Latency found = latency_found();
    if (found == Latency::not_told || found == Latency::not_finite) return;
    auto fraction = (found == Latency::other ? second_->pass : pass_).verdict(rule, nullptr);
    if (!fraction) return;
    for (JudgedFigure& figure : fraction->figures) verdict.figures.push_back(std::move(figure));
    verdict.verdict = std::max(verdict.verdict, fraction->verdict);
    if (!fraction->reason.empty()) verdict.reason += (verdict.reason.empty() ? "" : "; ") + fraction->reason;
}

void ChannelJudge::plot(CasePlots& plots) const {
    (latency_found() == Latency::other ? second_->pass : pass_).plot(plots);
}

std::optional<RuleVerdict> ChannelJudge::verdict(const Rule& rule) const {
    std::optional<RuleVerdict> verdict;
    if (std::holds_alternative<LatencyRule>(rule.kind)) {
        if (&rule == latency_rule_) verdict = latency_verdict(rule);
    } else if (latency_found() == Latency::other) {
        // One fault, one failure: the latency has failed, the rest is judged where the response lies.
        verdict = second_->pass.verdict(rule, second_->reference.rails());
        if (verdict) {
            const std::string note = "judged at the measured lag of " + samples_text(lags_->best_lag);
            verdict->reason = verdict->reason.empty() ? note : note + "; " + verdict->reason;
        }
    } else {
        verdict = pass_.verdict(rule, reference_.rails());
    }
    if (verdict) verdict->channel = judged_.plan.signal.channels == 1 ? 0 : judged_.channel;
    return verdict;
}

}  // namespace halflsb
