// Moving averages: a sum that runs on or one that is taken afresh, and its division.
#include "oracle/arithmetic/history.hpp"
#include "oracle/arithmetic/stored_terms.hpp"

namespace halflsb {

namespace {

/// y = N / D with N = S times 2^up + what the last division left, D in the same steps.
struct Quotient {
    std::int64_t times = 1;  ///< R of a reciprocal
    int up = 0;              ///< the sum in steps of the output
    Int128 divisor = 1;
    bool saves_fraction = false;
    Rounding rounding = Rounding::floor;
};

class MovingAverageTwin final : public StageTwin {
public:
    MovingAverageTwin(const DescribedStage& stage, const Quotient& quotient, const std::string& name)
        : is_running_(stage.structure == Structure::running_sum),
          oldest_first_(stage.summation == Summation::oldest_first),
          quotient_(quotient),
          accumulator_(name + "accumulator",
                       {stage.accumulator_bits, stage.in.word.fraction_bits, stage.accumulator_overflow}),
          output_(name + "output", stage.out.word),
          inputs_(static_cast<std::size_t>(std::get<MovingAverage>(stage.stage.design).points)) {}

    void reset() override {
        accumulator_.reset();
        output_.reset();
        inputs_.reset();
        sum_ = 0;
        rest_ = 0;
    }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        for (std::size_t i = 0; i < in.size(); ++i) {
            const std::int64_t x = in[i];
            if (is_running_) {
                sum_ = accumulator_.hold(sum_ - inputs_.ago(inputs_.depth()));
                sum_ = accumulator_.hold(sum_ + x);
            }
            inputs_.push(x);
            if (!is_running_) sum_ = fresh_sum();
            out[i] = static_cast<std::int64_t>(output_.hold(quotient()));
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        // The oldest has gone where the sum is fresh.
        inputs_.for_each_newest_first(words_of_inputs(), [&](std::int64_t word) { state.push_back(word); });
        if (is_running_) state.push_back(static_cast<std::int64_t>(sum_));
        if (quotient_.saves_fraction) state.push_back(static_cast<std::int64_t>(rest_));
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        const std::size_t inputs = words_of_inputs();
        if (state.size() < inputs + (is_running_ ? 1 : 0) + (quotient_.saves_fraction ? 1 : 0)) return false;
        inputs_.set(state.first(inputs));
        state = state.subspan(inputs);
        if (is_running_) {
            sum_ = state.front();
            if (!accumulator_.holds(state.front())) return false;
            state = state.subspan(1);
        }
        if (quotient_.saves_fraction) {
            rest_ = state.front();
            if (!(rest_ > -quotient_.divisor && rest_ < quotient_.divisor)) return false;
            state = state.subspan(1);
        }
        return true;
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override {
        reaches.push_back(accumulator_.reach());
        reaches.push_back(output_.reach());
    }

private:
    std::size_t words_of_inputs() const { return inputs_.depth() - (is_running_ ? 0 : 1); }

    Int128 fresh_sum() {
        const std::size_t points = inputs_.depth();
        Int128 sum = 0;
        for (std::size_t k = 0; k < points; ++k) {
            sum = accumulator_.hold(sum + inputs_.ago(oldest_first_ ? points - k : k + 1));
        }
        return sum;
    }

    Int128 quotient() {
        const Int128 number = static_cast<Int128>(sum_ * quotient_.times) * (Int128{1} << quotient_.up) + rest_;
        const Int128 divisor = quotient_.divisor;
        // Where both are small the processor divides at once.
        constexpr Int128 small = Int128{1} << 61;
        const Int128 y =
            number < small && number > -small && divisor < small
                ? divided(static_cast<std::int64_t>(number), static_cast<std::int64_t>(divisor), quotient_.rounding)
                : divided(number, divisor, quotient_.rounding);
        if (quotient_.saves_fraction) rest_ = number - y * divisor;
        return y;
    }

    bool is_running_, oldest_first_;
    Quotient quotient_;
    Int128 sum_ = 0, rest_ = 0;
    Register<Int128> accumulator_, output_;
    History<std::int64_t> inputs_;
};

}  // namespace

std::unique_ptr<StageTwin> make_moving_average_twin(const DescribedStage& stage, const std::string& name) {
    const int points = std::get<MovingAverage>(stage.stage.design).points;
    // Of the output's fraction bits more than the input's; a power of two common to number and divisor goes.
    int up = stage.out.word.fraction_bits - stage.in.word.fraction_bits;
    Quotient quotient{.saves_fraction = stage.fraction_saving, .rounding = stage.rounding};
    if (stage.division == Division::reciprocal) {
        quotient.times = stored_coefficient(stage, 1.0 / points);
        up -= stage.coefficient_fraction_bits;
    } else {
        quotient.divisor = points;
    }
    const double largest_sum =
        std::min(std::ldexp(1.0, stage.accumulator_bits - 1), points * largest_number(stage.in.word));
    const double number = std::ldexp(largest_sum * static_cast<double>(quotient.times), std::max(up, 0));
    const double divisor = std::ldexp(static_cast<double>(quotient.divisor), std::max(-up, 0));
    if (!(number < 0x1p125 && divisor < 0x1p125)) return nullptr;
    quotient.up = std::max(up, 0);
    quotient.divisor *= Int128{1} << std::max(-up, 0);
    return std::make_unique<MovingAverageTwin>(stage, quotient, name);
}

}  // namespace halflsb
