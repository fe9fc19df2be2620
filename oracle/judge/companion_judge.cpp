#include "oracle/judge/companion_judge.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/companion_case.hpp"
#include "oracle/judge/companion_limit.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/units.hpp"
#include "stimuli/samples_text.hpp"

namespace halflsb {
namespace {

std::string count_text(std::int64_t count) { return std::to_string(count); }

/// Of repeat, blocks and shift: a limit of 0 asks for every bit.
std::optional<Limit> written_limit(const Rule& rule) {
    return std::visit(
        [](const auto& kind) -> std::optional<Limit> {
            if constexpr (AsksForCompanions<std::decay_t<decltype(kind)>>) {
                return kind.largest;
            } else {
                return std::nullopt;
            }
        },
        rule.kind);
}

const Case* case_named(const Plan& plan, const std::string& name) {
    const auto found =
        std::find_if(plan.cases.begin(), plan.cases.end(), [&](const Case& the_case) { return the_case.name == name; });
    return found == plan.cases.end() ? nullptr : &*found;
}

bool is_at_rail(const SampleFormat& output, double value) {
    return output.has_lsb() && (value <= lowest_value(output) || value >= highest_value(output));
}

}  // namespace

CompanionJudge::CompanionJudge(const Plan& plan, const Case& the_case, BaseResponse base, bool wants_plots)
    : plan_(plan),
      case_(the_case),
      rule_(the_case.rules.front()),
      base_(std::move(base)),
      companion_(*the_case.companion),
      base_case_(case_named(plan, companion_.base)),
      rates_(plan, the_case),
      width_(static_cast<std::size_t>(plan.signal.channels)),
      first_judged_(first_judged_sample(plan, the_case)),
      not_comparable_(why_not_comparable()) {
    for (int number = 1; number <= plan.signal.channels; ++number) {
        channels_.emplace_back(plan.signal.output);
        Channel& channel = channels_.back();
        settle_limits(number, channel);
        if (wants_plots) channel.trace.emplace(plan, the_case, number, 0);
        if (!is_linearity() || plan.filter_is_unknown || base_case_ == nullptr || !not_comparable_.empty()) continue;
        const auto described = described_channel(plan, the_case, number);
        if (described) channel.rails.emplace(Rails{RailWatch(*described), RailWatch(*described), {}, {}});
    }
}

std::string CompanionJudge::why_not_comparable() const {
    const std::string base = "\"" + companion_.base + "\"";
    if (!base_.missing.empty()) return "not judged: " + base_.missing;
    if (!base_.read) return "not judged: nothing was captured of its base, " + base;
    const std::int64_t wanted = returned_samples(plan_, case_) - rates_.returned(companion_.shortest_delay_samples());
    if (base_.samples < wanted) {
        return "not judged: its base, " + base + ", has " + samples_text(base_.samples) + ", and " +
               count_text(wanted) + " are compared";
    }
    if (companion_.block_samples > 0 && base_.block_samples > 0) {
        const std::int64_t length = case_.stimulus->length_samples();
        if (std::min(sent_block_samples(case_, base_.block_samples), length) == std::min(base_.block_samples, length)) {
            return "its base, " + base + ", was sent in the same blocks of " +
                   samples_text(std::min(base_.block_samples, length)) +
                   ", so nothing is compared; give smaller block_samples";
        }
    }
    return {};
}

void CompanionJudge::settle_limits(int number, Channel& channel) const {
    const auto* linearity = std::get_if<LinearityRule>(&rule_.kind);
    const std::optional<Limit> written = written_limit(rule_);
    if (linearity == nullptr) {
        if (written && written->number > 0.0) channel.limit = value_of(*written, plan_.signal);
        return;
    }
    channel.limit = written ? value_of(*written, plan_.signal) : derived_companion_limit(plan_, case_, number);
    if (linearity->bias) channel.bias_limit = value_of(*linearity->bias, plan_.signal);
}

Outcome<void> CompanionJudge::read_base(std::int64_t count) {
    const SampleFormat& output = plan_.signal.output;
    for (Channel& channel : channels_) {
        channel.expected.assign(static_cast<std::size_t>(count), 0.0);
        channel.at_rail.assign(static_cast<std::size_t>(count), false);
    }
    for (const CompanionTerm& term : companion_.terms) {
        const std::int64_t first = samples_ - rates_.returned(term.delay_samples);
        const std::int64_t from = std::max<std::int64_t>(first, 0), to = std::min(first + count, base_.samples);
        if (to <= from) continue;
        base_codes_.resize(static_cast<std::size_t>(to - from) * width_);
        if (auto read = base_.read(from, base_codes_); !read) return read;
        for (std::size_t i = 0; i < static_cast<std::size_t>(to - from); ++i) {
            const std::size_t at = i + static_cast<std::size_t>(from - first);
            for (std::size_t c = 0; c < width_; ++c) {
                const double value = value_of(output, base_codes_[i * width_ + c]);
                channels_[c].expected[at] += static_cast<double>(term.gain) * value;
                if (is_at_rail(output, value)) channels_[c].at_rail[at] = true;
            }
        }
    }
    return {};
}

void CompanionJudge::watch_rails(Channel& channel, int number, const SentBlock& sent, std::int64_t first_sent) {
    if (!channel.rails || channel.clipped_from >= 0) return;
    Rails& rails = *channel.rails;
    const auto reached = [&](RailWatch& watch, std::span<const Code> codes, std::int64_t later) {
        rails.values.resize(codes.size());
        values_of(plan_.signal.input, codes, rails.values);
        rails.exempt.resize(watch.outputs_for(codes.size()));
        watch.add(rails.values, rails.exempt);
        for (const auto& index : {watch.first_clip_index(), watch.first_unsafe_index()}) {
            if (!index || (channel.clipped_from >= 0 && *index + later >= channel.clipped_from)) continue;
            channel.clipped_from = *index + later;
            const std::string node = watch.unsafe_node();
            channel.clipped_at = "the declared arithmetic may reach a rail" + (node.empty() ? "" : " (" + node + ")");
        }
    };
    const auto own = sent.of_channel(number);
    reached(rails.own, own, 0);
    base_codes_.assign(own.size(), zero_code(plan_.signal.input));
    if (is_driven(case_, number))
        fill_codes(*base_case_->stimulus, plan_.signal.input, plan_.signal.quantise, first_sent, base_codes_);
    reached(rails.of_base, base_codes_, rates_.returned(companion_.shortest_delay_samples()));
}

void CompanionJudge::trace(Channel& channel, std::span<const Code> sent, std::span<const Code> response) {
    if (!channel.trace) return;
    sent_values_.resize(sent.size());
    values_of(plan_.signal.input, sent, sent_values_);
    for (double& value : sent_values_) value *= plan_.signal.output_per_input;
    values_.resize(response.size());
    values_of(plan_.signal.output, response, values_);
    AlignedBlock block{samples_, {}, response, values_};
    block.reference.stimulus = sent_values_;
    if (not_comparable_.empty()) block.reference.declared = channel.expected;
    channel.trace->add(block);
}

void CompanionJudge::plot(CasePlots& plots) const {
    for (const Channel& channel : channels_) {
        if (channel.trace) channel.trace->plot(plots);
    }
}

void CompanionJudge::compare(Channel& channel, std::span<const Code> response) {
    const SampleFormat& output = plan_.signal.output;
    const std::int64_t block = companion_.block_samples;
    for (std::size_t i = 0; i < response.size(); ++i) {
        const std::int64_t index = samples_ + static_cast<std::int64_t>(i);
        if (index < first_judged_ || (channel.clipped_from >= 0 && index >= channel.clipped_from)) continue;
        const double value = value_of(output, response[i]), expected = channel.expected[i];
        if (is_linearity() && (channel.at_rail[i] || is_at_rail(output, value))) {
            channel.clipped_from = index;
            channel.clipped_at = "a response stands at an end of the output's word";
            continue;
        }
        ++channel.compared;
        const double difference = value - expected;
        if (std::isnan(difference)) {
            // The same not-a-number on both sides is the same answer; no number says how far it is from another.
            channel.is_finite = false;
            const bool both = std::isnan(value) && std::isnan(expected);
            if (both || is_linearity()) continue;
        }
        channel.sum.add(difference);
        if (difference == 0.0) continue;
        if (channel.differing++ == 0) channel.first_differing = index;
        channel.last_differing = index;
        if (block > 1 && index % block != channel.first_differing % block) channel.same_place = false;
        const double size = std::fabs(difference);
        channel.largest = std::max(channel.largest, size);
        if (channel.first_bad < 0 && !(channel.limit && size <= *channel.limit)) channel.first_bad = index;
    }
}

Outcome<void> CompanionJudge::add(const SentBlock& sent, std::int64_t first_sent, std::span<const Code> response) {
    const auto count = static_cast<std::int64_t>(response.size() / width_);
    if (not_comparable_.empty()) {
        if (auto read = read_base(count); !read) return read;
    }
    for (std::size_t c = 0; c < width_; ++c) {
        Channel& channel = channels_[c];
        const int number = static_cast<int>(c) + 1;
        const auto own = one_channel(response, plan_.signal.channels, number, one_);
        const auto codes = sent.of_channel(number);
        sent_codes_.resize(own.size());
        for (std::size_t i = 0; i < own.size(); ++i) {
            const std::int64_t newest = rates_.newest_sent(samples_ + static_cast<std::int64_t>(i)) - first_sent;
            sent_codes_[i] = codes[static_cast<std::size_t>(newest)];
        }
        trace(channel, sent_codes_, own);
        if (!not_comparable_.empty()) continue;
        watch_rails(channel, number, sent, first_sent);
        compare(channel, own);
        channel.watch.add(samples_, sent_codes_, channel.expected, own, channel.first_bad);
    }
    samples_ += count;
    return {};
}

std::string CompanionJudge::differences_text(const Channel& channel) const {
    const std::string base = "\"" + companion_.base + "\"";
    std::string text = count_text(channel.differing) + " of " + samples_text(channel.compared) +
                       (channel.differing == 1 ? " differs" : " differ") + " from " +
                       (companion_.terms.size() == 1 && companion_.terms.front() == CompanionTerm{}
                            ? "the response of " + base
                            : "what follows from the response of " + base);
    if (plan_.signal.output.has_lsb()) {
        text += (channel.differing == 1 ? ", by " : ", by up to ") +
                brief(channel.largest / lsb_value(plan_.signal.output)) + " LSB";
    }
    text += ", the first at sample " + count_text(channel.first_differing);
    const auto begins_block = [&](std::int64_t block) {
        return block > 1 && channel.first_differing > 0 && channel.first_differing % block == 0;
    };
    if (companion_.block_samples > 0 && !rates_.changes() &&
        (begins_block(companion_.block_samples) || begins_block(base_.block_samples)))
        text += ", where a block begins";
    if (companion_.block_samples > 1 && !rates_.changes() && channel.same_place && channel.differing > 1) {
        text += "; each is sample " + count_text(channel.first_differing % companion_.block_samples) +
                " of its block of " + count_text(companion_.block_samples);
    }
    if (std::holds_alternative<RepeatRule>(rule_.kind) && channel.last_differing < channel.compared / 4)
        text += "; none behind sample " + count_text(channel.last_differing) + ": state left from the run before";
    return text;
}

void CompanionJudge::add_figures(const Channel& channel, RuleVerdict& verdict) const {
    if (!channel.limit) {
        JudgedFigure figure{"differing samples",
                            judged(static_cast<double>(channel.differing)),
                            0.0,
                            std::nullopt,
                            "samples",
                            false,
                            pass_or_fail(channel.differing == 0),
                            {}};
        figure.margin = judged(0.0 - *figure.value);
        verdict.figures.push_back(std::move(figure));
        return;
    }
    const std::optional<Limit> written = written_limit(rule_);
    const auto add = [&](const char* name, double value, double limit, Limit::In in) {
        const double worth = worth_of(in, plan_.signal);
        JudgedFigure figure{name,
                            judged(value / worth),
                            judged(limit / worth),
                            std::nullopt,
                            unit_name(in, plan_.signal),
                            false,
                            Verdict::pass,
                            {}};
        figure.verdict = pass_or_fail(std::fabs(*figure.value) <= *figure.limit);
        figure.margin = judged(*figure.limit - std::fabs(*figure.value));
        verdict.figures.push_back(std::move(figure));
    };
    add("max", channel.largest, *channel.limit, written ? written->in : natural_unit(plan_.signal));
    if (!channel.bias_limit) return;
    const double mean = channel.sum.value() / static_cast<double>(channel.compared);
    add("bias", mean, *channel.bias_limit, std::get<LinearityRule>(rule_.kind).bias->in);
}

RuleVerdict CompanionJudge::verdict_of_channel(const Channel& channel) const {
    RuleVerdict verdict{rule_, Verdict::undecided, "base", {}, not_comparable_, std::nullopt};
    if (!not_comparable_.empty()) return verdict;
    const std::string clipped =
        channel.clipped_from < 0 ? ""
                                 : channel.clipped_at + " at sample " + count_text(channel.clipped_from) +
                                       ", and what clips is not linear: nothing is compared from there on; lower the "
                                       "level of the stimulus";
    if (channel.compared == 0) {
        verdict.reason = clipped.empty() ? "no sample was compared" : clipped;
        return verdict;
    }
    add_figures(channel, verdict);
    verdict.verdict = worst_of(verdict.figures);
    if (verdict.verdict == Verdict::fail) {
        verdict.reason = differences_text(channel);
        if (channel.first_bad >= 0) verdict.first_bad = channel.watch.found();
    } else if (!clipped.empty()) {
        verdict.verdict = Verdict::undecided;
        verdict.reason = clipped;
    } else if (!channel.is_finite && is_linearity()) {
        verdict.verdict = Verdict::undecided;
        verdict.reason = "a response holds a value that is not a finite number";
    }
    return verdict;
}

std::vector<RuleVerdict> CompanionJudge::verdicts() const {
    std::vector<RuleVerdict> all;
    for (std::size_t c = 0; c < channels_.size(); ++c) {
        all.push_back(verdict_of_channel(channels_[c]));
        all.back().channel = width_ == 1 ? 0 : static_cast<int>(c) + 1;
    }
    return all;
}

}  // namespace halflsb
