// Direct form II: the feedback first, then the zeros from the same state words.
#include "oracle/arithmetic/history.hpp"
#include "oracle/arithmetic/stored_terms.hpp"

namespace halflsb {

namespace {

template <class Sum>
class Direct2Twin final : public StageTwin {
public:
    Direct2Twin(const SumPlan& recursion, const SumPlan& zeros, const std::string& name)
        : recursion_(recursion),
          zeros_(zeros),
          state_(name + "state", recursion.target),
          output_(name + "output", zeros.target),
          states_(std::max(recursion.terms.size(), zeros.terms.size())) {
        for (const PlannedTerm& term : recursion.terms) feedback_.emplace_back(term, recursion);
        for (const PlannedTerm& term : zeros.terms) forward_.emplace_back(term, zeros);
    }

    void reset() override {
        recursion_.reset();
        zeros_.reset();
        state_.reset();
        output_.reset();
        states_.reset();
    }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        for (std::size_t i = 0; i < in.size(); ++i) {
            recursion_.start();
            recursion_.add(feedback_[0].product(in[i]));
            for (std::size_t k = 1; k < feedback_.size(); ++k) recursion_.add(feedback_[k].product(states_.ago(k)));
            states_.push(static_cast<std::int64_t>(state_.hold(recursion_.shortened())));
            zeros_.start();
            for (std::size_t k = 0; k < forward_.size(); ++k) zeros_.add(forward_[k].product(states_.ago(k + 1)));
            out[i] = static_cast<std::int64_t>(output_.hold(zeros_.shortened()));
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        states_.for_each_newest_first(states_.depth() - 1, [&](std::int64_t word) { state.push_back(word); });
        for (const auto* sum : {&recursion_, &zeros_}) {
            if (sum->saves_fraction()) state.push_back(sum->rest());
        }
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        const std::size_t words = states_.depth() - 1;
        if (state.size() < words) return false;
        states_.set(state.first(words));
        for (const std::int64_t word : state.first(words)) {
            if (!state_.holds(word)) return false;
        }
        state = state.subspan(words);
        for (auto* sum : {&recursion_, &zeros_}) {
            if (!sum->saves_fraction()) continue;
            if (state.empty() || !sum->set_rest(state.front())) return false;
            state = state.subspan(1);
        }
        return true;
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override {
        for (const auto& reach : {recursion_.reach(), state_.reach(), zeros_.reach(), output_.reach()}) {
            reaches.push_back(reach);
        }
    }

private:
    std::vector<Factor<Sum>> feedback_;  ///< the first one is the input's
    std::vector<Factor<Sum>> forward_;
    Accumulator<Sum> recursion_, zeros_;
    Register<Sum> state_, output_;
    History<std::int64_t> states_;
};

}  // namespace

std::unique_ptr<StageTwin> make_direct_2_twin(const DescribedStage& stage, const Recurrence& section,
                                              const std::string& name) {
    std::vector<PlannedTerm> recursion{whole_term(stage.in.word)};
    for (const PlannedTerm& term : feedback_terms(stage, section, stage.state)) recursion.push_back(term);
    std::vector<PlannedTerm> zeros;
    for (const double b : section.forward) zeros.push_back(forward_term(stage, b, stage.state));
    const SumPlan first = plan_of(stage, name + "feedback ", std::move(recursion), stage.state);
    SumPlan second = plan_of(stage, name, std::move(zeros), stage.out.word);
    second.sum_rounding = stage.output_rounding;
    if (first.is_too_wide() || second.is_too_wide()) return nullptr;
    if (first.is_narrow() && second.is_narrow())
        return std::make_unique<Direct2Twin<std::int64_t>>(first, second, name);
    return std::make_unique<Direct2Twin<Int128>>(first, second, name);
}

}  // namespace halflsb
