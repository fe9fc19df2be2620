#include "oracle/arithmetic/plausible_changes.hpp"

#include "oracle/arithmetic/described.hpp"
#include "oracle/arithmetic/family.hpp"

namespace halflsb {

namespace {

/// Widths of accumulators that processors have.
constexpr int usual_widths[] = {32, 16};

class Changes {
public:
    Changes(const FilterChain& chain, const SampleFormat& input, const SampleFormat& output, double gain)
        : chain_(chain), input_(input), output_(output), gain_(gain) {}

    std::vector<ArithmeticChange> all() {
        const auto declared = describe(chain_, input_, output_, gain_).described;
        if (!declared) return {};
        for (std::size_t stage = 0; stage < chain_.size(); ++stage) {
            stage_ = stage;
            declared_ = &declared->stages[stage];
            if (declared_->number == NumberKind::integer) {
                roundings();
                widths();
                overflows();
                registers();
                coefficients();
            } else {
                floats();
            }
            structures();
        }
        return std::move(found_);
    }

private:
    const StageArithmetic& said() const { return chain_[stage_].arithmetic; }
    Family family() const { return family_of(chain_[stage_]); }
    bool has(std::string_view word) const { return has_word(chain_[stage_], word); }
    bool feeds_back() const { return has("state_bits") && family() != Family::cic; }

    void add(std::string name, const StageArithmetic& arithmetic) {
        FilterChain changed = chain_;
        changed[stage_].arithmetic = arithmetic;
        const auto result = describe(changed, input_, output_, gain_);
        if (!result.described || result.described->missing) return;
        found_.push_back({std::move(name), stage_, arithmetic});
    }

    void roundings() {
        for (const std::string_view name : rounding_names()) {
            const Rounding other = *rounding_from(name);
            if (other == declared_->rounding) continue;
            StageArithmetic changed = said();
            changed.rounding = other;
            if (changed.output_rounding == declared_->rounding) changed.output_rounding = other;
            add(std::string(name) + " in place of " + std::string(name_of(declared_->rounding)), changed);
        }
        if (has("rounding_at") && declared_->rounding_at != RoundingAt::product) {
            StageArithmetic changed = said();
            changed.rounding_at = RoundingAt::product;
            changed.fraction_saving = false;
            add("each product shortened before it is added", changed);
        }
        if (!has("fraction_saving")) return;
        StageArithmetic changed = said();
        changed.fraction_saving = !declared_->fraction_saving;
        add(declared_->fraction_saving ? "no fraction saved" : "the fraction saved", changed);
    }

    void widths() {
        if (!has("accumulator_bits")) return;
        for (const int bits : usual_widths) {
            if (bits >= declared_->accumulator_bits) continue;
            StageArithmetic changed = said();
            changed.accumulator_bits = bits;
            add("an accumulator of " + std::to_string(bits) + " bits", changed);
        }
    }

    void overflows() {
        StageArithmetic changed = said();
        const bool wraps = changed.output_overflow == Overflow::wrap;
        changed.output_overflow = wraps ? Overflow::saturate : Overflow::wrap;
        changed.state_overflow = declared_->state.overflow;
        if (declared_->state == declared_->out.word) changed.state_overflow = changed.output_overflow;
        add(wraps ? "an output that saturates" : "an output that wraps", changed);
        if (has("accumulator_overflow") && declared_->accumulator_bits < wide_bits) {
            changed = said();
            const bool sum_wraps = declared_->accumulator_overflow == Overflow::wrap;
            changed.accumulator_overflow = sum_wraps ? Overflow::saturate : Overflow::wrap;
            add(sum_wraps ? "an accumulator that saturates" : "an accumulator that wraps", changed);
        }
        const bool is_narrow = feeds_back() && declared_->structure != Structure::transposed_2 &&
                               declared_->state.bits == declared_->out.word.bits && declared_->state.bits < 32;
        if (!is_narrow) return;
        changed = said();
        changed.state_bits = 32;
        changed.state_fraction_bits = declared_->state.fraction_bits;
        add("feedback before the output's overflow", changed);
    }

    void registers() {
        if (declared_->discarded_bits.empty()) return;
        StageArithmetic changed = said();
        changed.discarded_bits.clear();
        add("registers that discard nothing", changed);
    }

    void coefficients() {
        if (!chain_[stage_].coefficient_fraction_bits ||
            declared_->stage.arithmetic.coefficient_rounding == Rounding::toward_zero)
            return;
        StageArithmetic changed = said();
        changed.coefficient_rounding = Rounding::toward_zero;
        add("coefficients cut off toward zero", changed);
    }

    void structures() {
        for (const Structure other : structures_of(family())) {
            if (other == declared_->structure) continue;
            StageArithmetic changed = said();
            changed.structure = other;
            add(std::string(name_of(other)) + " in place of " + std::string(name_of(declared_->structure)), changed);
        }
    }

    void floats() {
        if (!has("multiply_add")) return;
        StageArithmetic changed = said();
        changed.fused_multiply_add = !declared_->fused;
        add(declared_->fused ? "products rounded before they are added" : "fused multiply-adds", changed);
        const bool sums = family() == Family::fir || declared_->structure == Structure::fresh_sum;
        if (!sums) return;
        changed = said();
        const bool is_newest = declared_->summation == Summation::newest_first;
        changed.summation = is_newest ? Summation::oldest_first : Summation::newest_first;
        add(is_newest ? "the oldest added first" : "the newest added first", changed);
    }

    const FilterChain& chain_;
    const SampleFormat& input_;
    const SampleFormat& output_;
    double gain_;
    std::size_t stage_ = 0;
    const DescribedStage* declared_ = nullptr;
    std::vector<ArithmeticChange> found_;
};

}  // namespace

std::vector<ArithmeticChange> plausible_changes(const FilterChain& chain, const SampleFormat& input,
                                                const SampleFormat& output, double output_per_input) {
    return Changes(chain, input, output, output_per_input).all();
}

}  // namespace halflsb
