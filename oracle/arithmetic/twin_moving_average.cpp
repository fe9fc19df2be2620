// Moving averages: a sum that runs on or one that is taken afresh, and its division.
#include "oracle/arithmetic/history.hpp"
#include "oracle/arithmetic/quotient.hpp"
#include "oracle/arithmetic/stored_terms.hpp"

namespace halflsb {

namespace {

class MovingAverageTwin final : public StageTwin {
public:
    /// `division` is that of all points.
    MovingAverageTwin(const DescribedStage& stage, const Division128& division, const Quotient& quotient,
                      const std::string& name)
        : is_running_(stage.structure == Structure::running_sum),
          is_growing_(stage.stage.initial == Initial::growing),
          oldest_first_(stage.summation == Summation::oldest_first),
          constant_(division.divisor * stage.sum_constant_eighths / 8),
          division_(division),
          quotient_(quotient),
          accumulator_(name + "accumulator",
                       {stage.accumulator_bits, stage.in.word.fraction_bits, stage.accumulator_overflow}),
          output_(name + "output", stage.out.word),
          inputs_(static_cast<std::size_t>(std::get<MovingAverage>(stage.stage.design).points)) {}

    void reset() override {
        accumulator_.reset();
        output_.reset();
        inputs_.reset();
        quotient_.reset();
        sum_ = 0;
        samples_ = 0;
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
            out[i] = static_cast<std::int64_t>(output_.hold(divided_sum()));
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        // The oldest has gone where the sum is fresh.
        inputs_.for_each_newest_first(words_of_inputs(), [&](std::int64_t word) { state.push_back(word); });
        if (is_running_) state.push_back(static_cast<std::int64_t>(sum_));
        if (quotient_.saves_fraction()) state.push_back(quotient_.rest());
        if (is_growing_) state.push_back(samples_);
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        const std::size_t inputs = words_of_inputs();
        if (state.size() < inputs + (is_running_ ? 1 : 0) + (quotient_.saves_fraction() || is_growing_ ? 1 : 0))
            return false;
        inputs_.set(state.first(inputs));
        state = state.subspan(inputs);
        if (is_running_) {
            sum_ = state.front();
            if (!accumulator_.holds(state.front())) return false;
            state = state.subspan(1);
        }
        if (is_growing_) {
            samples_ = state.front();
            state = state.subspan(1);
            return samples_ >= 0 && samples_ <= division_.divisor;
        }
        if (!quotient_.saves_fraction()) return true;
        const std::int64_t rest = state.front();
        state = state.subspan(1);
        return quotient_.set_rest(rest);
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

    /// By the samples so far where there are fewer than points and the average grows.
    Int128 divided_sum() {
        if (!is_growing_ || samples_ == division_.divisor) return quotient_(sum_ + constant_);
        Division128 division = division_;
        division.divisor = ++samples_;
        auto so_far = Quotient::of(division);
        return so_far ? (*so_far)(sum_) : 0;  // a smaller divisor needs no more bits than that of all points
    }

    bool is_running_, is_growing_, oldest_first_;
    std::int64_t samples_ = 0;  ///< up to points, of an average that grows
    std::int64_t constant_;     ///< added to each sum
    Division128 division_;
    Quotient quotient_;
    Int128 sum_ = 0;
    Register<Int128> accumulator_, output_;
    History<std::int64_t> inputs_;
};

}  // namespace

std::unique_ptr<StageTwin> make_moving_average_twin(const DescribedStage& stage, const std::string& name) {
    const int points = std::get<MovingAverage>(stage.stage.design).points;
    Division128 division{.divisor = stage.divisor.value_or(points),
                         .up = stage.out.word.fraction_bits - stage.in.word.fraction_bits,
                         .saves_fraction = stage.fraction_saving,
                         .rounding = stage.rounding,
                         .largest_number = std::min(std::ldexp(1.0, stage.accumulator_bits - 1),
                                                    points * largest_number(stage.in.word))};
    if (stage.division == Division::reciprocal) {
        division.times = stored_coefficient(stage, 1.0 / points);
        division.divisor = 1;
        division.up -= stage.coefficient_fraction_bits;
    }
    const auto quotient = Quotient::of(division);
    if (!quotient) return nullptr;
    return std::make_unique<MovingAverageTwin>(stage, division, *quotient, name);
}

}  // namespace halflsb
