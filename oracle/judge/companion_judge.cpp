#include "oracle/judge/companion_judge.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/companion_case.hpp"
#include "oracle/judge/companion_limit.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

std::string count_text(std::int64_t count) { return std::to_string(count); }
std::string samples_text(std::int64_t count) { return count_text(count) + (count == 1 ? " sample" : " samples"); }

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

bool is_at_rail(const SampleFormat& output, double value) {
    return output.has_lsb() && (value <= lowest_value(output) || value >= highest_value(output));
}

}  // namespace

CompanionJudge::CompanionJudge(const Plan& plan, const Case& the_case, const BaseResponse& base)
    : plan_(plan),
      case_(the_case),
      rule_(the_case.rules.front()),
      base_(base),
      companion_(*the_case.companion),
      rates_(plan, the_case),
      width_(static_cast<std::size_t>(plan.signal.channels)),
      first_judged_(first_judged_sample(plan, the_case)),
      not_comparable_(why_not_comparable()) {
    for (int number = 1; number <= plan.signal.channels; ++number) {
        channels_.emplace_back(plan.signal.output);
        settle_limits(number, channels_.back());
    }
}

std::string CompanionJudge::why_not_comparable() const {
    const std::string base = "\"" + companion_.base + "\"";
    if (!base_.missing.empty()) return "not judged: " + base_.missing;
    if (!base_.read) return "not judged: nothing was captured of its base, " + base;
    const std::int64_t wanted =
        returned_samples(plan_, case_) - rates_.returned(companion_.shortest_delay_samples());
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

void CompanionJudge::compare(Channel& channel, std::span<const Code> response) {
    const SampleFormat& output = plan_.signal.output;
    const std::int64_t block = companion_.block_samples;
    for (std::size_t i = 0; i < response.size(); ++i) {
        const std::int64_t index = samples_ + static_cast<std::int64_t>(i);
        if (index < first_judged_ || channel.clipped_from >= 0) continue;
        const double value = value_of(output, response[i]), expected = channel.expected[i];
        if (is_linearity() && (channel.at_rail[i] || is_at_rail(output, value))) {
            channel.clipped_from = index;
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
        if (size > channel.largest) {
            channel.largest = size;
            channel.largest_at = index;
        }
        if (channel.first_bad < 0 && !(channel.limit && size <= *channel.limit)) channel.first_bad = index;
    }
}

Outcome<void> CompanionJudge::add(const SentBlock& sent, std::int64_t first_sent, std::span<const Code> response) {
    const auto count = static_cast<std::int64_t>(response.size() / width_);
    if (!not_comparable_.empty()) {
        samples_ += count;
        return {};
    }
    if (auto read = read_base(count); !read) return read;
    for (std::size_t c = 0; c < width_; ++c) {
        Channel& channel = channels_[c];
        const int number = static_cast<int>(c) + 1;
        const auto own = one_channel(response, plan_.signal.channels, number, one_);
        compare(channel, own);
        const auto codes = sent.of_channel(number);
        sent_codes_.resize(own.size());
        for (std::size_t i = 0; i < own.size(); ++i) {
            const std::int64_t newest = rates_.newest_sent(samples_ + static_cast<std::int64_t>(i)) - first_sent;
            sent_codes_[i] = codes[static_cast<std::size_t>(newest)];
        }
        channel.watch.add(samples_, sent_codes_, channel.expected, own, channel.first_bad);
    }
    samples_ += count;
    return {};
}

std::span<const double> CompanionJudge::expected(int channel) const {
    return channels_[static_cast<std::size_t>(channel - 1)].expected;
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
    if (companion_.block_samples > 1 && !rates_.changes() && channel.same_place && channel.differing > 1) {
        text += "; each is sample " + count_text(channel.first_differing % companion_.block_samples) +
                " of its block of " + count_text(companion_.block_samples);
    }
    const std::int64_t last = channel.last_differing - first_judged_;
    if (std::holds_alternative<RepeatRule>(rule_.kind) && channel.largest_at - first_judged_ <= last / 2 &&
        channel.first_differing - first_judged_ <= last / 4 && last < channel.compared / 2) {
        text += "; the last is sample " + count_text(channel.last_differing) +
                ", and the largest one lies before the middle of them: state left from the run before";
    }
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
        JudgedFigure figure{name, judged(value / worth), judged(limit / worth), std::nullopt, unit_name(in, plan_.signal),
                            false, Verdict::pass, {}};
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
                                 : "a response stands at an end of the output's word at sample " +
                                       count_text(channel.clipped_from) +
                                       ", and one that clips is not linear: nothing is compared from there on; lower "
                                       "the level of the stimulus";
    if (channel.compared == 0) {
        verdict.reason = clipped.empty() ? "no sample was compared" : clipped;
        return verdict;
    }
    add_figures(channel, verdict);
    verdict.verdict = worst_of(verdict.figures);
    verdict.reason = channel.differing > 0 ? differences_text(channel) : "every sample equals what follows from \"" + companion_.base + "\"";
    if (verdict.verdict == Verdict::fail) {
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
