#include "oracle/arithmetic/state_search.hpp"

#include <algorithm>
#include <set>

#include "oracle/arithmetic/twin.hpp"

namespace halflsb {

namespace {

using State = std::vector<std::int64_t>;

class Box {
public:
    explicit Box(std::span<const std::int64_t> limits) : limits_(limits.begin(), limits.end()) {}

    /// nullopt: more than can be searched.
    std::optional<std::int64_t> states() const {
        std::int64_t count = 1;
        for (const std::int64_t limit : limits_) {
            if (limit < 0 || limit >= most_searched_states) return std::nullopt;
            count *= 2 * limit + 1;
            if (count > most_searched_states) return std::nullopt;
        }
        return count;
    }

    std::optional<std::size_t> index_of(const State& state) const {
        std::int64_t index = 0;
        for (std::size_t i = 0; i < limits_.size(); ++i) {
            if (state[i] < -limits_[i] || state[i] > limits_[i]) return std::nullopt;
            index = index * (2 * limits_[i] + 1) + state[i] + limits_[i];
        }
        return static_cast<std::size_t>(index);
    }

    State state_of(std::size_t index) const {
        State state(limits_.size());
        auto rest = static_cast<std::int64_t>(index);
        for (std::size_t i = limits_.size(); i-- > 0;) {
            state[i] = rest % (2 * limits_[i] + 1) - limits_[i];
            rest /= 2 * limits_[i] + 1;
        }
        return state;
    }

private:
    State limits_;
};

class Search {
public:
    Search(Twin& twin, const Port& in, const Port& out, const Box& box, std::size_t states)
        : twin_(twin),
          silence_{static_cast<Code>(in.zero_code)},
          zero_out_(out.zero_code),
          box_(box),
          seen_(states, 0) {}

    /// False: it took too many steps.
    bool run() {
        for (std::size_t index = 0; index < seen_.size(); ++index) {
            if (seen_[index] != 0) continue;
            if (!twin_.set_state(box_.state_of(index))) continue;  // beyond the ends of a word
            if (!walk()) return false;
        }
        return true;
    }

    std::vector<ZeroInputCycle> take() {
        std::sort(cycles_.begin(), cycles_.end(), [](const ZeroInputCycle& a, const ZeroInputCycle& b) {
            return a.largest() != b.largest() ? a.largest() > b.largest() : a.period_samples < b.period_samples;
        });
        return std::move(cycles_);
    }

private:
    // In the box each state is marked by the walk that came through. Outside a walk meets itself at the latest where
    // it stood at the last power of two (R. P. Brent's cycle finding).
    bool walk() {
        ++walk_;
        State mark;
        std::int64_t since_mark = 0, until_mark = 1;
        for (State state = twin_.state();; state = twin_.state()) {
            if (const auto index = box_.index_of(state)) {
                if (seen_[*index] == walk_) return note_cycle(state);
                if (seen_[*index] != 0) return true;
                seen_[*index] = walk_;
            }
            if (state == mark) return note_cycle(state);
            if (since_mark == until_mark || mark.empty()) {
                mark = state;
                until_mark *= 2;
                since_mark = 0;
            }
            ++since_mark;
            if (++steps_ > 16 * most_searched_states) return false;
            step();
        }
    }

    bool note_cycle(const State& on_it) {
        ZeroInputCycle cycle{zero_range, -zero_range, 0};
        State first = on_it;  // the least of its states stands for the cycle
        do {
            step();
            ++cycle.period_samples;
            for (const Code code : returned_) {
                cycle.lowest = std::min(cycle.lowest, code - zero_out_);
                cycle.highest = std::max(cycle.highest, code - zero_out_);
            }
            State state = twin_.state();
            if (state == on_it) break;
            first = std::min(first, std::move(state));
        } while (++steps_ <= 16 * most_searched_states);
        if (steps_ > 16 * most_searched_states) return false;
        if (known_.insert(std::move(first)).second) cycles_.push_back(cycle);
        return true;
    }

    void step() {
        returned_.resize(twin_.outputs_for(1));
        twin_.process(silence_, returned_);
    }

    static constexpr std::int64_t zero_range = std::int64_t{1} << 62;

    Twin& twin_;
    std::vector<Code> silence_;
    std::int64_t zero_out_;
    const Box& box_;
    std::vector<std::uint32_t> seen_;
    std::uint32_t walk_ = 0;
    std::int64_t steps_ = 0;
    std::vector<Code> returned_;
    std::vector<ZeroInputCycle> cycles_;
    std::set<State> known_;
};

bool keeps_floats(const DescribedChain& chain) {
    return std::any_of(chain.stages.begin(), chain.stages.end(),
                       [](const DescribedStage& stage) { return stage.number == NumberKind::float32; });
}

}  // namespace

std::optional<std::vector<ZeroInputCycle>> zero_input_cycles(const DescribedChain& chain,
                                                             std::span<const std::int64_t> limits) {
    const auto twin = make_twin(chain);
    if (twin == nullptr || keeps_floats(chain) || limits.size() != twin->state().size()) return std::nullopt;
    const Box box(limits);
    const auto states = box.states();
    if (!states) return std::nullopt;
    Search search(*twin, chain.stages.front().in, chain.stages.back().out, box, static_cast<std::size_t>(*states));
    if (!search.run()) return std::nullopt;
    return search.take();
}

}  // namespace halflsb
