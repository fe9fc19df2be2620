#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <optional>
#include <string>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/companion_case.hpp"
#include "oracle/judge/companion_judge.hpp"
#include "oracle/judge/companion_limit.hpp"
#include "oracle/judge/covered_arithmetic.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/leftover.hpp"
#include "oracle/judge/sent_block.hpp"
#include "oracle/judge/units.hpp"
#include "stimuli/samples_text.hpp"

namespace halflsb {
namespace {

/// What a companion sends, before it is cut to the input's word.
struct Sums {
    double lowest = 0.0, highest = 0.0;  ///< values
    std::int64_t worst_at = -1;          ///< where the word is left the furthest
    double worst = 0.0;                  ///< |value| there, over what the word has on that side
    bool is_silent = true;               ///< the base
};

Sums sums_of(const Plan& plan, const Case& the_case, const Case& base) {
    const SampleFormat& input = plan.signal.input;
    const double lowest = lowest_value(input), highest = highest_value(input);
    const std::int64_t length = the_case.stimulus->length_samples();
    Sums sums;
    std::vector<Code> codes(judge_block_samples);
    std::vector<double> values;
    for (std::int64_t first = 0; first < length; first += static_cast<std::int64_t>(codes.size())) {
        values.assign(codes.size(), 0.0);
        for (const CompanionTerm& term : the_case.companion->terms) {
            fill_codes(*base.stimulus, input, plan.signal.quantise, first - term.delay_samples, codes);
            for (std::size_t i = 0; i < codes.size(); ++i) {
                const double value = value_of(input, codes[i]);
                if (value != 0.0) sums.is_silent = false;
                values[i] += static_cast<double>(term.gain) * value;
            }
        }
        const auto count = std::min(static_cast<std::size_t>(length - first), values.size());
        for (std::size_t i = 0; i < count; ++i) {
            const double over = values[i] < 0.0 ? values[i] / lowest : values[i] / highest;
            if (over > 1.0 && over > sums.worst) {
                sums.worst = over;
                sums.worst_at = first + static_cast<std::int64_t>(i);
            }
        }
    }
    return sums;
}

class CompanionCheck {
public:
    CompanionCheck(const Rule& asked, const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals)
        : asked_(asked),
          plan_(plan),
          case_(the_case),
          companion_(*the_case.companion),
          base_(std::find_if(plan.cases.begin(), plan.cases.end(),
                             [&](const Case& other) { return other.name == companion_.base; })),
          refusals_(refusals) {}

    /// Each step says whether nothing was refused.
    void run() {
        if (base_ == plan_.cases.end()) return;
        starts_alike() && flush_clears() && is_split() && keeps_the_cycle() && is_linear_case() && fits_the_word() &&
            has_a_limit();
    }

private:
    bool refuse(const std::string& problem, const std::string& remedy) {
        refusals_.push_back({asked_.position, "case \"" + companion_.base + "\"" + problem, remedy});
        return false;
    }

    bool starts_alike() {
        if (case_.start == Start::running) {
            return refuse(" starts running, in a state that is not had twice, and its stimulus is to be sent again",
                          "write start = \"reset\" or \"flush\"");
        }
        const bool is_later = companion_.longest_delay_samples() > 0;
        if (!is_later || plan_.filter_is_unknown) return true;
        for (int channel = 1; channel <= plan_.signal.channels; ++channel) {
            for (const FilterStage& stage : chain_of(plan_, case_, channel)) {
                if (stage.initial == Initial::zeros) continue;
                return refuse(
                    " starts a filter whose first samples depend on when they come (initial), so what is "
                    "sent later is answered otherwise",
                    "write start = \"flush\", or leave by_samples out");
            }
        }
        return true;
    }

    /// Bit for bit is asked only of what forgets to the bit.
    bool flush_clears() {
        if (case_.start != Start::flush || plan_.filter_is_unknown || is_linearity() || has_room()) return true;
        for (int channel = 1; channel <= plan_.signal.channels; ++channel) {
            const auto chain = described_channel(plan_, case_, channel);
            if (!chain) continue;
            const auto forgets = samples_to_forget(*chain);
            if (forgets && *forgets <= case_.start_samples) continue;
            return refuse(
                " starts with a flush, after which the rounding in a loop may still hold what went before, "
                "and the rule asks for equal bits",
                "write start = \"reset\", or give the rule max_lsb");
        }
        return true;
    }

    /// A limit above 0 is written.
    bool has_room() const {
        return std::visit(
            [](const auto& kind) {
                if constexpr (AsksForCompanions<std::decay_t<decltype(kind)>>) {
                    return kind.largest && kind.largest->number > 0.0;
                } else {
                    return true;
                }
            },
            asked_.kind);
    }

    bool is_split() {
        const std::int64_t length = base_->stimulus->length_samples();
        if (companion_.block_samples > 0 && companion_.block_samples >= length) {
            return refuse(" sends " + samples_text(length) + ", which in blocks of " +
                              samples_text(companion_.block_samples) + " are one block, as they are without",
                          length > 1 ? "give block_samples below " + std::to_string(length) : "lengthen the stimulus");
        }
        // Of what is added later the answer is known as long as that to the stimulus is.
        const std::int64_t left = case_.stimulus->length_samples() - companion_.longest_delay_samples();
        if (left <= 0) {
            return refuse(" sends " + samples_text(length) + ", and of itself, " +
                              std::to_string(companion_.longest_delay_samples()) + " later, nothing is left to add",
                          "give by_samples below " + std::to_string(length) + ", or lengthen the stimulus");
        }
        return true;
    }

    bool keeps_the_cycle() {
        if (plan_.filter_is_unknown) return true;
        const std::int64_t cycle = CaseRates(plan_, case_).cycle().inputs;
        for (const CompanionTerm& term : companion_.terms) {
            if (term.delay_samples % cycle == 0) continue;
            return refuse(" is to be sent " + samples_text(term.delay_samples) +
                              " later, and its filter begins anew only every " + std::to_string(cycle),
                          "give by_samples as multiples of " + std::to_string(cycle));
        }
        return true;
    }

    bool is_linearity() const { return std::holds_alternative<LinearityRule>(asked_.kind); }

    bool is_linear_case() {
        if (!is_linearity() || plan_.filter_is_unknown) return true;
        for (int channel = 1; channel <= plan_.signal.channels; ++channel) {
            if (!is_driven(case_, channel) || is_linear(chain_of(plan_, case_, channel))) continue;
            return refuse(" asks for linearity of a filter with a median in it, which is not linear",
                          "leave the rule out; rules of kind repeat, blocks and shift hold");
        }
        return true;
    }

    bool fits_the_word() {
        if (!is_linearity()) return true;
        const Sums sums = sums_of(plan_, case_, *base_);
        if (sums.is_silent) {
            return refuse(" is silent, and silence says nothing of linearity",
                          "use noise: shape = \"noise\", level_ratio = 0.25, length_samples = 4096");
        }
        if (sums.worst_at < 0) return true;
        return refuse(" has no codes for its stimulus " + companion_.text + ": sample " +
                          std::to_string(sums.worst_at) + " would lie beyond the range of " +
                          std::string(plan_.signal.input.name) + ", " + brief(sums.worst) + " times as far as it goes",
                      "divide the level of the stimulus by " + brief(std::ceil(sums.worst * 100.0) / 100.0) +
                          ", or leave that one out");
    }

    bool has_a_limit() {
        const auto* linearity = std::get_if<LinearityRule>(&asked_.kind);
        if (linearity == nullptr || linearity->largest) return true;
        if (plan_.filter_is_unknown) {
            return refuse(
                " asks for linearity within a limit that follows from the arithmetic, and the filter is "
                "unknown",
                "give max_lsb, max_ratio or max_unit");
        }
        if (!plan_.signal.input.has_lsb() && !is_exact_in_floats()) {
            return refuse(" would be sent " + companion_.text + ", which rounds the stimulus itself in " +
                              std::string(plan_.signal.input.name) + ", and no limit is derived for that",
                          "give by_ratio powers of two, or give max_ratio");
        }
        for (int channel = 1; channel <= plan_.signal.channels; ++channel) {
            const auto chain = described_channel(plan_, case_, channel);
            if (chain) {
                if (auto refusal = not_covered(asked_, plan_.signal, case_, *chain)) {
                    refusals_.push_back(std::move(*refusal));
                    return false;
                }
            }
            const auto limit = derived_companion_limit(plan_, case_, channel);
            if (limit && std::isfinite(*limit)) continue;
            return refuse(
                " asks for linearity within a limit that follows from the arithmetic, and for this filter "
                "none does",
                "give max_lsb, max_ratio or max_unit");
        }
        return true;
    }

    /// A single term by a power of two: no bit of a float is lost.
    bool is_exact_in_floats() const {
        if (companion_.terms.size() != 1) return false;
        const std::int64_t size = std::llabs(companion_.terms.front().gain);
        return (size & (size - 1)) == 0;
    }

    const Rule& asked_;
    const Plan& plan_;
    const Case& case_;
    const Companion& companion_;
    std::vector<Case>::const_iterator base_;
    std::vector<Refusal>& refusals_;
};

/// The first companion that is refused is enough: the others ask the same.
void check_companions(const Rule& asked, const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals) {
    if (the_case.companion) CompanionCheck(asked, plan, the_case, refusals).run();
}

}  // namespace

void check(const RepeatRule&, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    check_companions(asked, plan, the_case, refusals);
}

void check(const BlocksRule&, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    check_companions(asked, plan, the_case, refusals);
}

void check(const ShiftRule&, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    check_companions(asked, plan, the_case, refusals);
}

void check(const LinearityRule&, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    check_companions(asked, plan, the_case, refusals);
}

}  // namespace halflsb
