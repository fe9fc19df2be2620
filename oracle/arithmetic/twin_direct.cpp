// Stages that keep past inputs and past results: fir, comb, sections and iir in direct form I.
#include "oracle/arithmetic/history.hpp"
#include "oracle/arithmetic/kept_samples.hpp"
#include "oracle/arithmetic/stored_terms.hpp"

namespace halflsb {

namespace {

/// A term and how many samples ago its word was.
struct DelayedTerm {
    PlannedTerm term;
    std::size_t delay = 0;
};

struct DirectPlan {
    std::vector<DelayedTerm> forward, feedback;  ///< in the order in which they are added
    SumPlan sum;                                 ///< its terms: all of them
    bool has_state = false;                      ///< results go to state words first
    Word out;
    Rounding output_rounding = Rounding::floor;
    Kept kept = {};  ///< of a decimator; it has no state
};

template <class Sum>
class DirectTwin final : public StageTwin {
public:
    DirectTwin(const DirectPlan& plan, const std::string& name)
        : sum_(plan.sum),
          has_state_(plan.has_state),
          state_(name + "state", plan.sum.target),
          to_output_{plan.out.fraction_bits - plan.sum.target.fraction_bits, plan.output_rounding, plan.out.overflow},
          output_(name + "output", plan.out),
          inputs_(deepest(plan.forward) + 1),
          states_(deepest(plan.feedback)),
          kept_(plan.kept) {
        for (const DelayedTerm& each : plan.forward) forward_.emplace_back(each, plan.sum);
        for (const DelayedTerm& each : plan.feedback) feedback_.emplace_back(each, plan.sum);
        for (const auto* taps : {&forward_, &feedback_}) {
            for (const Tap& tap : *taps) is_plain_ = is_plain_ && tap.factor.is_plain();
        }
        for (const Tap& tap : forward_) plain_forward_.push_back({tap.factor.times(), tap.delay});
        for (const Tap& tap : feedback_) plain_feedback_.push_back({tap.factor.times(), tap.delay});
    }

    void reset() override {
        sum_.reset();
        state_.reset();
        output_.reset();
        inputs_.reset();
        states_.reset();
        kept_.reset();
    }

    std::size_t outputs_for(std::size_t inputs) const override { return kept_.count_of(inputs); }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        if (is_plain_) {
            run(plain_forward_, plain_feedback_, in, out);
        } else {
            run(forward_, feedback_, in, out);
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        const auto put = [&](std::int64_t word) { state.push_back(word); };
        inputs_.for_each_newest_first(inputs_.depth() - 1, put);
        states_.for_each_newest_first(states_.depth(), put);
        if (sum_.saves_fraction()) put(sum_.rest());
        if (kept_.has_state()) put(kept_.state());
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        const std::size_t inputs = inputs_.depth() - 1, states = states_.depth();
        if (state.size() < inputs + states + (sum_.saves_fraction() ? 1 : 0) + (kept_.has_state() ? 1 : 0))
            return false;
        inputs_.set(state.first(inputs));
        states_.set(state.subspan(inputs, states));
        for (const std::int64_t word : state.subspan(inputs, states)) {
            if (!state_.holds(word)) return false;
        }
        state = state.subspan(inputs + states);
        bool is_state = true;
        if (sum_.saves_fraction()) {
            is_state = sum_.set_rest(state.front());
            state = state.subspan(1);
        }
        if (kept_.has_state()) {
            is_state = kept_.set_state(state.front()) && is_state;
            state = state.subspan(1);
        }
        return is_state;
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override {
        reaches.push_back(sum_.reach());
        if (has_state_) reaches.push_back(state_.reach());
        reaches.push_back(output_.reach());
    }

private:
    struct Tap {
        Tap(const DelayedTerm& each, const SumPlan& sum)
            : factor(each.term, sum), delay(static_cast<std::ptrdiff_t>(each.delay)) {}
        Sum product(std::int64_t word) const { return factor.product(word); }
        Factor<Sum> factor;
        std::ptrdiff_t delay;
    };

    /// One that is a multiplication and nothing else.
    struct PlainTap {
        Sum product(std::int64_t word) const { return static_cast<Sum>(times * word); }
        Sum times;
        std::ptrdiff_t delay;
    };

    static std::size_t deepest(const std::vector<DelayedTerm>& terms) {
        std::size_t depth = 0;
        for (const DelayedTerm& each : terms) depth = std::max(depth, each.delay);
        return depth;
    }

    template <class AnyTap>
    void run(const std::vector<AnyTap>& forward, const std::vector<AnyTap>& feedback, std::span<const std::int64_t> in,
             std::span<std::int64_t> out) {
        // Local, so that what is written to memory cannot be thought to change it.
        Accumulator<Sum> sum = sum_;
        auto result = out.begin();
        for (const std::int64_t x : in) {
            inputs_.push(x);
            if (!kept_.keeps()) continue;
            sum.start();
            const std::int64_t* const newest = inputs_.newest();
            for (const AnyTap& tap : forward) sum.add(tap.product(newest[-tap.delay]));
            if (has_state_) {
                const std::int64_t* const next = states_.newest() + 1;
                for (const AnyTap& tap : feedback) sum.add(tap.product(next[-tap.delay]));
                const Sum state = state_.hold(sum.shortened());
                states_.push(static_cast<std::int64_t>(state));
                *result++ = static_cast<std::int64_t>(output_.hold(to_output_(state)));
            } else {
                *result++ = static_cast<std::int64_t>(output_.hold(sum.shortened()));
            }
        }
        sum_ = std::move(sum);
    }

    std::vector<Tap> forward_, feedback_;
    std::vector<PlainTap> plain_forward_, plain_feedback_;  ///< the same, used where all are plain
    bool is_plain_ = true;
    Accumulator<Sum> sum_;
    bool has_state_;
    Register<Sum> state_;
    Shift to_output_;
    Register<Sum> output_;
    History<std::int64_t> inputs_, states_;
    KeptSamples kept_;
};

std::unique_ptr<StageTwin> make(const DescribedStage& stage, DirectPlan plan, const std::string& name) {
    std::vector<PlannedTerm> terms;
    for (const auto* list : {&plan.forward, &plan.feedback}) {
        for (const DelayedTerm& each : *list) terms.push_back(each.term);
    }
    plan.sum = plan_of(stage, name, std::move(terms), plan.has_state ? stage.state : stage.out.word);
    plan.out = stage.out.word;
    plan.output_rounding = stage.output_rounding;
    // A state is raised on its way out too.
    const double raised =
        std::ldexp(largest_number(plan.sum.target), plan.out.fraction_bits - plan.sum.target.fraction_bits);
    if (plan.sum.is_too_wide()) return nullptr;
    if (plan.sum.is_narrow() && raised < 0x1p61) return std::make_unique<DirectTwin<std::int64_t>>(plan, name);
    return std::make_unique<DirectTwin<Int128>>(plan, name);
}

}  // namespace

std::unique_ptr<StageTwin> make_fir_twin(const DescribedStage& stage, const std::vector<double>& taps, Kept kept,
                                         const std::string& name) {
    DirectPlan plan;
    for (std::size_t k = 0; k < taps.size(); ++k) {
        plan.forward.push_back({forward_term(stage, taps[k], stage.in.word), k});
    }
    if (stage.summation == Summation::oldest_first) std::reverse(plan.forward.begin(), plan.forward.end());
    plan.kept = kept;
    return make(stage, std::move(plan), name);
}

std::unique_ptr<StageTwin> make_comb_twin(const DescribedStage& stage, const std::string& name) {
    const auto& comb = std::get<Comb>(stage.stage.design);
    const auto delay = static_cast<std::size_t>(comb.delay_samples);
    DirectPlan plan;
    plan.forward = {{forward_term(stage, comb.direct, stage.in.word), 0},
                    {forward_term(stage, comb.forward, stage.in.word), delay}};
    plan.feedback = {{feedback_term(stage, comb.feedback, stage.state), delay}};
    plan.has_state = true;
    return make(stage, std::move(plan), name);
}

std::unique_ptr<StageTwin> make_direct_1_twin(const DescribedStage& stage, const Recurrence& section,
                                              const std::string& name) {
    DirectPlan plan;
    for (std::size_t k = 0; k < section.forward.size(); ++k) {
        plan.forward.push_back({forward_term(stage, section.forward[k], stage.in.word), k});
    }
    std::size_t delay = 0;
    for (const PlannedTerm& term : feedback_terms(stage, section, stage.state))
        plan.feedback.push_back({term, ++delay});
    plan.has_state = true;
    return make(stage, std::move(plan), name);
}

}  // namespace halflsb
