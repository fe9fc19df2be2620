// Transposed direct form II: the states are sums on their way to the output.
#include "oracle/arithmetic/stored_terms.hpp"

namespace halflsb {

namespace {

/// One sum: the next state, where there is one, then a product of x, then one of y, where there are such.
struct TransposedPlan {
    SumPlan sum;
    bool has_next = false, has_forward = false, has_feedback = false;
    double largest_state = 0.0;  ///< that the sum leaves in its state word
};

template <class Sum>
class Transposed2Twin final : public StageTwin {
public:
    Transposed2Twin(const std::vector<TransposedPlan>& plans, const std::string& name)
        : output_(name + "output", plans.front().sum.target), states_(plans.size() - 1, 0) {
        for (const TransposedPlan& plan : plans) {
            nodes_.emplace_back(plan);
            if (nodes_.size() > 1) is_wide_ = is_wide_ || plan.largest_state >= 0x1p63;
            if (nodes_.size() == 1) continue;
            registers_.emplace_back(name + "state " + std::to_string(nodes_.size() - 1), plan.sum.target);
        }
    }

    void reset() override {
        for (Node& node : nodes_) node.sum.reset();
        for (Register<Sum>& word : registers_) word.reset();
        output_.reset();
        std::fill(states_.begin(), states_.end(), 0);
    }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        for (std::size_t i = 0; i < in.size(); ++i) {
            const std::int64_t x = in[i];
            const auto y = static_cast<std::int64_t>(output_.hold(summed(0, x, 0)));
            for (std::size_t k = 1; k < nodes_.size(); ++k) {
                states_[k - 1] = registers_[k - 1].hold(summed(k, x, y));
            }
            out[i] = y;
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        for (const Sum word : states_) {
            state.push_back(static_cast<std::int64_t>(static_cast<std::uint64_t>(word)));
            if (is_wide_) state.push_back(static_cast<std::int64_t>(word >> half_bits));
        }
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        const std::size_t words = is_wide_ ? 2 : 1;
        if (state.size() < words * states_.size()) return false;
        for (std::size_t k = 0; k < states_.size(); ++k) {
            Sum& word = states_[k];
            word = state[words * k];
            if (is_wide_) {
                word = static_cast<Sum>(static_cast<UnsignedOf<Sum>>(state[words * k + 1]) << half_bits |
                                        static_cast<std::uint64_t>(state[words * k]));
            }
            if (std::fabs(static_cast<double>(word)) > nodes_[k + 1].largest || !registers_[k].holds(word)) {
                return false;
            }
        }
        state = state.subspan(words * states_.size());
        return true;
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override {
        reaches.push_back(nodes_[0].sum.reach());
        reaches.push_back(output_.reach());
        for (std::size_t k = 1; k < nodes_.size(); ++k) {
            reaches.push_back(nodes_[k].sum.reach());
            reaches.push_back(registers_[k - 1].reach());
        }
    }

private:
    struct Node {
        explicit Node(const TransposedPlan& plan)
            : sum(plan.sum),
              has_next(plan.has_next),
              has_forward(plan.has_forward),
              has_feedback(plan.has_feedback),
              largest(plan.largest_state) {
            for (const PlannedTerm& term : plan.sum.terms) factors.emplace_back(term, plan.sum);
        }
        Accumulator<Sum> sum;
        std::vector<Factor<Sum>> factors;
        bool has_next, has_forward, has_feedback;
        double largest;
    };

    Sum summed(std::size_t k, std::int64_t x, std::int64_t y) {
        Node& node = nodes_[k];
        const Factor<Sum>* factor = node.factors.data();
        node.sum.start();
        if (node.has_next) node.sum.add((factor++)->product(states_[k]));
        if (node.has_forward) node.sum.add((factor++)->product(x));
        if (node.has_feedback) node.sum.add(factor->product(y));
        return node.sum.shortened();
    }

    std::vector<Node> nodes_;  ///< the output's sum, then that of each state
    std::vector<Register<Sum>> registers_;
    Register<Sum> output_;
    std::vector<Sum> states_;
    /// Some state, an accumulator's word that nobody limited, needs more than 64 bits: two words in state().
    bool is_wide_ = false;
    static constexpr int half_bits = bits_of<Sum> / 2;  ///< 64 where there can be a wide one
};

}  // namespace

std::unique_ptr<StageTwin> make_transposed_2_twin(const DescribedStage& stage, const Recurrence& section,
                                                  const std::string& name) {
    const std::vector<PlannedTerm> feedback = feedback_terms(stage, section, stage.out.word);
    const std::size_t order = std::max(section.forward.size() - 1, feedback.size());
    const int products =
        stage.coefficient_fraction_bits + std::max(stage.in.word.fraction_bits, stage.out.word.fraction_bits);
    std::vector<TransposedPlan> plans(order + 1);
    bool narrow = true;
    // From the last one, which has no state before it: so each knows how large the next one's can get.
    for (std::size_t k = order + 1; k-- > 0;) {
        TransposedPlan& plan = plans[k];
        std::vector<PlannedTerm> terms;
        plan.has_next = k < order;
        plan.has_forward = k < section.forward.size();
        plan.has_feedback = k > 0 && k <= feedback.size();
        if (plan.has_next) {
            terms.push_back(whole_term(stage.state));
            terms.back().largest_word = plans[k + 1].largest_state;
        }
        if (plan.has_forward) terms.push_back(forward_term(stage, section.forward[k], stage.in.word));
        if (plan.has_feedback) terms.push_back(feedback[k - 1]);
        const Word& target = k == 0 ? stage.out.word : stage.state;
        plan.sum = plan_of(stage, k == 0 ? name : name + "state " + std::to_string(k) + " ", std::move(terms), target);
        plan.sum.accumulator.fraction_bits = accumulator_fraction_bits_of(stage, products, target.fraction_bits);
        plan.sum.saves_fraction = false;
        const int raised = target.fraction_bits - plan.sum.accumulator.fraction_bits;
        plan.largest_state = std::min(largest_number(target), std::ldexp(plan.sum.largest_sum(), raised) + 1.0);
        if (plan.sum.is_too_wide()) return nullptr;
        narrow = narrow && plan.sum.is_narrow();
    }
    if (narrow) return std::make_unique<Transposed2Twin<std::int64_t>>(plans, name);
    return std::make_unique<Transposed2Twin<Int128>>(plans, name);
}

}  // namespace halflsb
