// One-poles as firmware writes them: by the difference to the state, or with a leak.
#include "oracle/arithmetic/stored_terms.hpp"

namespace halflsb {

namespace {

// Differences of words have up to 65 bits, their products with a coefficient more: in 128 bits always.
class OnePoleTwin final : public StageTwin {
public:
    /// `product`: the plan of C (x - s) as a sum of one.
    OnePoleTwin(const DescribedStage& stage, const SumPlan& product, const std::string& name)
        : leaks_(stage.structure == Structure::leak),
          coefficient_(product.terms.front().coefficient),
          input_to_difference_{difference_bits(stage) - stage.in.word.fraction_bits, Rounding::floor, Overflow::wrap},
          state_to_difference_{difference_bits(stage) - stage.state.fraction_bits, Rounding::floor, Overflow::wrap},
          product_(product),
          product_to_accumulator_{product.accumulator.fraction_bits - product.terms.front().fraction_bits,
                                  stage.rounding, stage.accumulator_overflow},
          input_product_to_state_{
              stage.state.fraction_bits - stage.in.word.fraction_bits - stage.coefficient_fraction_bits, stage.rounding,
              stage.state.overflow},
          state_product_to_state_{-stage.coefficient_fraction_bits, stage.rounding, stage.state.overflow},
          state_(name + "state", stage.state),
          to_output_{stage.out.word.fraction_bits - stage.state.fraction_bits, stage.output_rounding,
                     stage.out.word.overflow},
          output_(name + "output", stage.out.word) {}

    static int difference_bits(const DescribedStage& stage) {
        return std::max(stage.in.word.fraction_bits, stage.state.fraction_bits);
    }

    void reset() override {
        product_.reset();
        state_.reset();
        output_.reset();
        held_ = 0;
    }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        for (std::size_t i = 0; i < in.size(); ++i) {
            held_ = state_.hold(held_ + (leaks_ ? leak(in[i]) : difference(in[i])));
            out[i] = static_cast<std::int64_t>(output_.hold(to_output_(held_)));
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        state.push_back(static_cast<std::int64_t>(held_));
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        if (state.empty()) return false;
        const std::int64_t word = state.front();
        held_ = word;
        state = state.subspan(1);
        return state_.holds(word);
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override {
        if (!leaks_) reaches.push_back(product_.reach());
        reaches.push_back(state_.reach());
        reaches.push_back(output_.reach());
    }

private:
    Int128 difference(Int128 x) {
        product_.start();
        product_.add(product_to_accumulator_(coefficient_ * (input_to_difference_(x) - state_to_difference_(held_))));
        return product_.shortened();
    }
    Int128 leak(Int128 x) const {
        return input_product_to_state_(coefficient_ * x) - state_product_to_state_(coefficient_ * held_);
    }

    bool leaks_;
    Int128 coefficient_;
    Shift input_to_difference_, state_to_difference_;
    Accumulator<Int128> product_;
    Shift product_to_accumulator_;
    Shift input_product_to_state_, state_product_to_state_;
    Int128 held_ = 0;
    Register<Int128> state_;
    Shift to_output_;
    Register<Int128> output_;
};

}  // namespace

std::unique_ptr<StageTwin> make_one_pole_twin(const DescribedStage& stage, const std::string& name) {
    const double b0 = std::get<BiquadCascade>(stage.stage.design).sections.front().b0;
    const Word& in = stage.in.word;
    const int bits = OnePoleTwin::difference_bits(stage);
    PlannedTerm term = forward_term(stage, b0, {wide_bits, bits, Overflow::wrap});
    term.largest_word = std::ldexp(largest_number(in), bits - in.fraction_bits) +
                        std::ldexp(largest_number(stage.state), bits - stage.state.fraction_bits);
    SumPlan product = plan_of(stage, name, {term}, stage.state);
    product.saves_fraction = false;
    if (product.is_too_wide() || term.largest_word > 0x1p125) return nullptr;
    return std::make_unique<OnePoleTwin>(stage, product, name);
}

}  // namespace halflsb
