// Stages in float32: each operation rounded once, to nearest even, in a stated order.
//
// The tree is built without contraction, so a * b + c is two operations. std::fmaf rounds once whether the processor
// has a fused multiply-add or the C library computes it.
#include "oracle/arithmetic/float_ports.hpp"
#include "oracle/arithmetic/history.hpp"
#include "oracle/arithmetic/kept_samples.hpp"
#include "oracle/arithmetic/stage_twin.hpp"
#include "oracle/filters/coefficients.hpp"

namespace halflsb {

namespace {

/// sum + a b
inline float with_product(float sum, float a, float b, bool fused) {
    return fused ? std::fmaf(a, b, sum) : sum + a * b;
}

struct FloatTap {
    float times = 0.0f;
    std::size_t delay = 0;
};

/// What all have: the ends, and a fixed list of float32 that is their state.
class FloatStage : public StageTwin {
public:
    FloatStage(const DescribedStage& stage, const std::string& name, Kept kept = {})
        : input_(stage.in), output_(stage.out, stage.rounding, name + "output"), fused_(stage.fused), kept_(kept) {}

    void reset() override {
        output_.reset();
        kept_.reset();
        forget();
    }

    std::size_t outputs_for(std::size_t inputs) const override { return kept_.count_of(inputs); }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        auto result = out.begin();
        for (const std::int64_t x : in) {
            take(input_(x));
            if (kept_.keeps()) *result++ = output_(result_of_taken());
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        for (const float value : floats()) state.push_back(bits_of_float(value));
        if (kept_.has_state()) state.push_back(kept_.state());
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        std::vector<float> values(floats().size());
        if (state.size() < values.size()) return false;
        for (std::size_t i = 0; i < values.size(); ++i) {
            if (!is_float_bits(state[i])) return false;
            values[i] = float_of_bits(state[i]);
        }
        set_floats(values);
        state = state.subspan(values.size());
        if (!kept_.has_state()) return true;
        if (state.empty() || !kept_.set_state(state.front())) return false;
        state = state.subspan(1);
        return true;
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override { reaches.push_back(output_.reach()); }

protected:
    /// One sample; what is computed of it, by result_of_taken(), only where it is kept.
    virtual void take(float x) = 0;
    virtual float result_of_taken() = 0;
    virtual void forget() = 0;
    virtual std::vector<float> floats() const = 0;
    virtual void set_floats(std::span<const float> values) = 0;
    bool fused() const { return fused_; }

private:
    FloatInput input_;
    FloatOutput output_;
    bool fused_;
    KeptSamples kept_;
};

/// One result for each sample.
class FloatStep : public FloatStage {
public:
    using FloatStage::FloatStage;

protected:
    virtual float step(float x) = 0;

private:
    void take(float x) override { taken_ = x; }
    float result_of_taken() override { return step(taken_); }

    float taken_ = 0.0f;
};

std::vector<float> newest_first(const History<float>& history, std::size_t count) {
    std::vector<float> values;
    history.for_each_newest_first(count, [&](float value) { values.push_back(value); });
    return values;
}

/// fir, comb, and sections in direct form I.
class FloatDirect final : public FloatStage {
public:
    FloatDirect(const DescribedStage& stage, std::vector<FloatTap> forward, std::vector<FloatTap> feedback, Kept kept,
                const std::string& name)
        : FloatStage(stage, name, kept),
          forward_(std::move(forward)),
          feedback_(std::move(feedback)),
          inputs_(deepest(forward_) + 1),
          results_(deepest(feedback_)) {}

private:
    static std::size_t deepest(const std::vector<FloatTap>& taps) {
        std::size_t depth = 0;
        for (const FloatTap& tap : taps) depth = std::max(depth, tap.delay);
        return depth;
    }

    void take(float x) override { inputs_.push(x); }
    float result_of_taken() override {
        float sum = forward_[0].times * inputs_.ago(forward_[0].delay + 1);
        for (std::size_t k = 1; k < forward_.size(); ++k) {
            sum = with_product(sum, forward_[k].times, inputs_.ago(forward_[k].delay + 1), fused());
        }
        for (const FloatTap& tap : feedback_) sum = with_product(sum, tap.times, results_.ago(tap.delay), fused());
        if (!feedback_.empty()) results_.push(sum);
        return sum;
    }
    void forget() override {
        inputs_.reset();
        results_.reset();
    }
    std::vector<float> floats() const override {
        std::vector<float> values = newest_first(inputs_, inputs_.depth() - 1);
        for (const float value : newest_first(results_, results_.depth())) values.push_back(value);
        return values;
    }
    void set_floats(std::span<const float> values) override {
        inputs_.set(values.first(inputs_.depth() - 1));
        results_.set(values.subspan(inputs_.depth() - 1));
    }

    std::vector<FloatTap> forward_, feedback_;
    History<float> inputs_, results_;
};

class FloatDirect2 final : public FloatStep {
public:
    FloatDirect2(const DescribedStage& stage, std::vector<float> forward, std::vector<float> feedback,
                 const std::string& name)
        : FloatStep(stage, name),
          forward_(std::move(forward)),
          feedback_(std::move(feedback)),
          states_(std::max(forward_.size(), feedback_.size() + 1)) {}

private:
    float step(float x) override {
        float w = x;
        for (std::size_t k = 0; k < feedback_.size(); ++k)
            w = with_product(w, feedback_[k], states_.ago(k + 1), fused());
        states_.push(w);
        float y = forward_[0] * w;
        for (std::size_t k = 1; k < forward_.size(); ++k) y = with_product(y, forward_[k], states_.ago(k + 1), fused());
        return y;
    }
    void forget() override { states_.reset(); }
    std::vector<float> floats() const override { return newest_first(states_, states_.depth() - 1); }
    void set_floats(std::span<const float> values) override { states_.set(values); }

    std::vector<float> forward_, feedback_;
    History<float> states_;
};

class FloatTransposed2 final : public FloatStep {
public:
    FloatTransposed2(const DescribedStage& stage, std::vector<float> forward, std::vector<float> feedback,
                     const std::string& name)
        : FloatStep(stage, name),
          forward_(std::move(forward)),
          feedback_(std::move(feedback)),
          states_(std::max(forward_.size() - 1, feedback_.size()), 0.0f) {}

private:
    float step(float x) override {
        const std::size_t order = states_.size();
        const float y = order == 0 ? forward_[0] * x : with_product(states_[0], forward_[0], x, fused());
        for (std::size_t k = 1; k <= order; ++k) {
            // The last one has no state before it: its first product is rounded as such.
            bool is_begun = k < order;
            float sum = is_begun ? states_[k] : 0.0f;
            if (k < forward_.size()) add(sum, is_begun, forward_[k], x);
            if (k <= feedback_.size()) add(sum, is_begun, feedback_[k - 1], y);
            states_[k - 1] = sum;
        }
        return y;
    }
    void add(float& sum, bool& is_begun, float times, float word) const {
        sum = is_begun ? with_product(sum, times, word, fused()) : times * word;
        is_begun = true;
    }
    void forget() override { std::fill(states_.begin(), states_.end(), 0.0f); }
    std::vector<float> floats() const override { return states_; }
    void set_floats(std::span<const float> values) override { states_.assign(values.begin(), values.end()); }

    std::vector<float> forward_, feedback_;
    std::vector<float> states_;
};

class FloatOnePole final : public FloatStep {
public:
    FloatOnePole(const DescribedStage& stage, float coefficient, const std::string& name)
        : FloatStep(stage, name), leaks_(stage.structure == Structure::leak), coefficient_(coefficient) {}

private:
    float step(float x) override {
        if (leaks_) {
            const float fed = with_product(state_, coefficient_, x, fused());
            state_ = with_product(fed, -coefficient_, state_, fused());
        } else {
            state_ = with_product(state_, coefficient_, x - state_, fused());
        }
        return state_;
    }
    void forget() override { state_ = 0.0f; }
    std::vector<float> floats() const override { return {state_}; }
    void set_floats(std::span<const float> values) override { state_ = values.front(); }

    bool leaks_;
    float coefficient_;
    float state_ = 0.0f;
};

class FloatMovingAverage final : public FloatStep {
public:
    FloatMovingAverage(const DescribedStage& stage, const std::string& name)
        : FloatStep(stage, name),
          points_(static_cast<std::size_t>(std::get<MovingAverage>(stage.stage.design).points)),
          divisor_(static_cast<float>(points_)),
          reciprocal_(1.0f / divisor_),
          is_running_(stage.structure == Structure::running_sum),
          oldest_first_(stage.summation == Summation::oldest_first),
          multiplies_(stage.division == Division::reciprocal),
          is_growing_(stage.stage.initial == Initial::growing),
          inputs_(points_) {}

private:
    float step(float x) override {
        if (is_running_) sum_ = (sum_ - inputs_.ago(points_)) + x;
        inputs_.push(x);
        if (!is_running_) {
            sum_ = inputs_.ago(oldest_first_ ? points_ : 1);
            for (std::size_t k = 1; k < points_; ++k) sum_ += inputs_.ago(oldest_first_ ? points_ - k : k + 1);
        }
        if (is_growing_ && samples_ < divisor_) return sum_ / (samples_ += 1.0f);
        return multiplies_ ? sum_ * reciprocal_ : sum_ / divisor_;
    }
    void forget() override {
        inputs_.reset();
        sum_ = samples_ = 0.0f;
    }
    std::vector<float> floats() const override {
        std::vector<float> values = newest_first(inputs_, is_running_ ? points_ : points_ - 1);
        if (is_running_) values.push_back(sum_);
        if (is_growing_) values.push_back(samples_);
        return values;
    }
    void set_floats(std::span<const float> values) override {
        if (is_growing_) {
            samples_ = values.back();
            values = values.first(values.size() - 1);
        }
        if (is_running_) {
            sum_ = values.back();
            values = values.first(points_);
        }
        inputs_.set(values);
    }

    std::size_t points_;
    float divisor_, reciprocal_;
    bool is_running_, oldest_first_, multiplies_, is_growing_;
    History<float> inputs_;
    float sum_ = 0.0f, samples_ = 0.0f;  ///< samples: a whole number up to points, of an average that grows
};

std::vector<float> in_float(const std::vector<double>& numbers, double sign) {
    std::vector<float> floats;
    for (const double number : numbers) floats.push_back(static_cast<float>(sign * number));
    return floats;
}

std::vector<FloatTap> in_a_row(const std::vector<float>& numbers, std::size_t first_delay) {
    std::vector<FloatTap> taps;
    for (const float number : numbers) taps.push_back({number, first_delay++});
    return taps;
}

}  // namespace

std::unique_ptr<StageTwin> make_float_section_twin(const DescribedStage& stage, const Recurrence& section,
                                                   const std::string& name) {
    std::vector<float> forward = in_float(section.forward, 1.0), feedback = in_float(section.feedback, -1.0);
    switch (stage.structure) {
        case Structure::direct_2:
            return std::make_unique<FloatDirect2>(stage, std::move(forward), std::move(feedback), name);
        case Structure::transposed_2:
            return std::make_unique<FloatTransposed2>(stage, std::move(forward), std::move(feedback), name);
        case Structure::difference:
        case Structure::leak:
            return std::make_unique<FloatOnePole>(stage, forward.front(), name);
        default:
            return std::make_unique<FloatDirect>(stage, in_a_row(forward, 0), in_a_row(feedback, 1), Kept{}, name);
    }
}

std::unique_ptr<StageTwin> make_float_fir_twin(const DescribedStage& stage, const std::vector<double>& taps, Kept kept,
                                               const std::string& name) {
    std::vector<FloatTap> forward = in_a_row(in_float(taps, 1.0), 0);
    if (stage.summation == Summation::oldest_first) std::reverse(forward.begin(), forward.end());
    return std::make_unique<FloatDirect>(stage, std::move(forward), std::vector<FloatTap>{}, kept, name);
}

std::unique_ptr<StageTwin> make_float_comb_twin(const DescribedStage& stage, const std::string& name) {
    const auto comb = std::get<Comb>(with_rounded_coefficients(stage.stage).design);
    const auto delay = static_cast<std::size_t>(comb.delay_samples);
    const std::vector<float> forward = in_float({comb.direct, comb.forward}, 1.0);
    const std::vector<float> feedback = in_float({comb.feedback}, -1.0);
    return std::make_unique<FloatDirect>(stage, std::vector<FloatTap>{{forward[0], 0}, {forward[1], delay}},
                                         std::vector<FloatTap>{{feedback[0], delay}}, Kept{}, name);
}

std::unique_ptr<StageTwin> make_float_average_twin(const DescribedStage& stage, const std::string& name) {
    return std::make_unique<FloatMovingAverage>(stage, name);
}

}  // namespace halflsb
