#include <algorithm>
#include <cmath>
#include <string>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/sent_block.hpp"
#include "oracle/judge/settling.hpp"
#include "oracle/judge/transition_judge.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

/// What the design returns within the window.
std::vector<double> design_in(const SampleWindow& window, const Plan& plan, const Case& the_case, int channel) {
    const CaseRates rates(plan, the_case);
    ReferenceSource reference(plan, the_case, channel, {.design = true});
    SentBlock sent(plan, the_case);
    std::vector<double> found;
    const std::int64_t block = rates.cycles_within(judge_block_samples) * rates.cycle().inputs;
    const std::int64_t length = rates.sent_for(window.end);
    for (std::int64_t first = 0, index = 0; first < length;) {
        const std::int64_t count = std::min(block, length - first);
        sent.take(first, static_cast<std::size_t>(count));
        for (const double value : reference.next(sent.of_channel(channel)).design) {
            if (index >= window.begin && index < window.end) found.push_back(value);
            ++index;
        }
        first += count;
    }
    return found;
}

class TransitionCheck {
public:
    TransitionCheck(const TransitionRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
                    std::vector<Refusal>& refusals)
        : rule_(rule), asked_(asked), plan_(plan), case_(the_case), rates_(plan, the_case), refusals_(refusals) {}

    void all() const {
        const auto change = first_level_change(plan_, case_);
        if (!change) {
            refuse("its stimulus does not step from one level to another",
                   "give it shape = \"step\", with at_samples = 64 or more");
            return;
        }
        for (int channel = 1; channel <= plan_.signal.channels; ++channel) {
            if (is_driven(case_, channel) && !channel_is_told(*change, channel)) return;
        }
    }

private:
    void refuse(const std::string& problem, const std::string& remedy) const {
        refusals_.push_back(
            {asked_.position, "a rule of kind \"transition\" in case \"" + case_.name + "\": " + problem, remedy});
    }
    std::string at_channel(int channel) const {
        return plan_.signal.channels == 1 ? "" : " on channel " + std::to_string(channel);
    }

    bool channel_is_told(const LevelChange& change, int channel) const {
        const auto step = step_window(plan_, case_, channel, change);
        if (!step) {
            refuse("its filter" + at_channel(channel) + " takes more than " + std::to_string(longest_settling_samples) +
                       " samples to settle on the level before the step",
                   "begin at 0, after a reset; or leave the rule out");
            return false;
        }
        if (step->step - step->window.begin < least_samples_before_step) {
            refuse("it steps at sample " + std::to_string(change.at) +
                       ", and the level before it is told from sample " + std::to_string(step->window.begin) +
                       " of the response on, over at least " + std::to_string(least_samples_before_step),
                   "step at at_samples = " +
                       std::to_string(rates_.sent_for(step->window.begin + least_samples_before_step)) + " or later");
            return false;
        }
        const double amplitude = step->levels.second - step->levels.first;
        if (!(std::fabs(amplitude) >= finest_step(plan_.signal.output))) {
            refuse("its filter" + at_channel(channel) + " has a gain of " +
                       brief(gain_of_constant(chain_of(plan_, case_, channel))) +
                       " at frequency 0, so nothing of a step remains",
                   "leave the rule out; rules about error, response and exact hold");
            return false;
        }
        return direction_fits(amplitude) && design_is_told(*step, channel, change);
    }

    bool direction_fits(double amplitude) const {
        const bool rises = amplitude > 0.0;
        if (!(rises ? rule_.max_fall_samples : rule_.max_rise_samples)) return true;
        refuse(rises ? "the response rises, and max_fall_samples limits a fall"
                     : "the response falls, and max_rise_samples limits a rise",
               rises ? "give max_rise_samples" : "give max_fall_samples");
        return false;
    }

    /// What cannot be said of the design cannot be said of the board.
    bool design_is_told(const StepWindow& step, int channel, const LevelChange& change) const {
        const TransitionAnswer answer = measure_transition(transition_question(rule_, plan_.signal, step),
                                                           design_in(step.window, plan_, case_, channel));
        if (!answer.figures) {
            return refuse_design("figures", answer.fault, channel, change);
        }
        for (const LimitedFigure& limited : limited_figures(rule_)) {
            const TransitionFigure& found = (*answer.figures).*(limited.figure);
            if (!found.figure) return refuse_design(limited.name, found.fault, channel, change);
            // An aberration is not negative: within its bound of 0 none is told from a limit.
            if (found.figure->bound <= limited.limit) continue;
            refuse("the " + std::string(limited.name) + at_channel(channel) + " is told to " +
                       brief(found.figure->bound) + " " + limited.unit + ", what a code is worth there, and " +
                       brief(limited.limit) + " is less",
                   "give a limit of at least " + brief(2.0 * found.figure->bound) + ", or the step a higher level");
            return false;
        }
        if (!rule_.final_value) return true;
        const TransitionFigure& final_value = answer.figures->final_value;
        if (!final_value.figure) return refuse_design("final value", final_value.fault, channel, change);
        // So slow that it does not seem to move, or not there yet: a right board would fail.
        const double off = std::fabs(final_value.figure->value - step.levels.second);
        if (off > std::fabs(value_of(*rule_.final_value, plan_.signal)))
            return refuse_design("final value", TransitionFault::not_settled, channel, change);
        return true;
    }

    bool refuse_design(const std::string& what, TransitionFault fault, int channel, const LevelChange& change) const {
        std::string remedy = "give the step a higher level, or a wider band_percent";
        if (fault != TransitionFault::too_coarse) {
            // The last quarter tells the final value.
            const auto settling = settling_samples(plan_, case_, channel);
            remedy = settling ? "hold the level for " + std::to_string(rates_.whole_cycles(*settling * 4 / 3 + 64)) +
                                    " samples, so to sample " +
                                    std::to_string(rates_.whole_cycles(change.at + *settling * 4 / 3 + 64))
                              : "hold the level for longer";
        }
        refuse("the " + what + " of the design itself" + at_channel(channel) +
                   " cannot be told: " + std::string(reason_of(fault)),
               remedy);
        return false;
    }

    const TransitionRule& rule_;
    const Rule& asked_;
    const Plan& plan_;
    const Case& case_;
    CaseRates rates_;
    std::vector<Refusal>& refusals_;
};

}  // namespace

void check(const TransitionRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    TransitionCheck(rule, asked, plan, the_case, refusals).all();
}

}  // namespace halflsb
