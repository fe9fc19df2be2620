#include "oracle/judge/companion_case.hpp"

#include <algorithm>

namespace halflsb {
namespace {

class CompanionStimulus final : public Stimulus {
public:
    CompanionStimulus(const Signal& signal, std::shared_ptr<const Stimulus> base, const Companion& companion)
        : format_(signal.input),
          quantise_(signal.quantise),
          base_(std::move(base)),
          terms_(companion.terms),
          length_(base_->length_samples() + companion.shortest_delay_samples()) {}

    void fill(std::int64_t first_index, std::span<double> ratios) const override {
        const double full_scale = full_scale_value(format_);
        std::fill(ratios.begin(), ratios.end(), 0.0);
        std::vector<Code> codes(ratios.size());
        for (const CompanionTerm& term : terms_) {
            fill_codes(*base_, format_, quantise_, first_index - term.delay_samples, codes);
            // Values of codes, whole gains and a full scale that is a power of two: every step is exact.
            for (std::size_t i = 0; i < codes.size(); ++i)
                ratios[i] += static_cast<double>(term.gain) * value_of(format_, codes[i]) / full_scale;
        }
        for (std::size_t i = 0; i < ratios.size(); ++i) {
            const std::int64_t index = first_index + static_cast<std::int64_t>(i);
            if (index < 0 || index >= length_) ratios[i] = 0.0;
        }
    }
    std::int64_t length_samples() const override { return length_; }
    Spectrum spectrum() const override { return base_->spectrum(); }

private:
    SampleFormat format_;
    Rounding quantise_;
    std::shared_ptr<const Stimulus> base_;
    std::vector<CompanionTerm> terms_;
    std::int64_t length_;
};

std::string purpose_of(const Rule& rule) {
    if (std::holds_alternative<RepeatRule>(rule.kind)) return "state that outlives a reset, memory that nothing sets";
    if (std::holds_alternative<BlocksRule>(rule.kind)) return "state that is lost or swapped between blocks";
    if (std::holds_alternative<ShiftRule>(rule.kind))
        return "a ring that wraps wrongly, an offset, a fault that hangs on the sample's place";
    return "truncation, clipping, a gain that hangs on the level";
}

}  // namespace

std::shared_ptr<const Stimulus> companion_stimulus(const Signal& signal, std::shared_ptr<const Stimulus> base,
                                                   const Companion& companion) {
    return std::make_shared<CompanionStimulus>(signal, std::move(base), companion);
}

Case companion_case(const Plan& plan, const Case& base, const Rule& rule, Companion companion) {
    Case made = base;
    companion.base = base.name;
    made.name = base.name + " [" + companion.name + "]";
    made.stimulus = companion_stimulus(plan.signal, base.stimulus, companion);
    made.rules = {rule};
    made.purpose = purpose_of(rule);
    made.has_companions = false;
    made.companion = std::move(companion);
    return made;
}

std::vector<Case> with_companions(const Plan& plan, Case base) {
    std::vector<Case> all{base};
    for (const Rule& rule : base.rules) {
        for (Companion& companion : companions_of(rule))
            all.push_back(companion_case(plan, base, rule, std::move(companion)));
    }
    all.front().has_companions = all.size() > 1;
    std::erase_if(all.front().rules, [](const Rule& rule) { return !companions_of(rule).empty(); });
    return all;
}

std::int64_t sent_block_samples(const Case& the_case, std::int64_t granted) {
    const std::int64_t own = the_case.companion ? the_case.companion->block_samples : 0;
    return own > 0 ? std::min(own, granted) : granted;
}

}  // namespace halflsb
