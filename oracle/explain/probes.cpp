#include "oracle/explain/probes.hpp"

#include <algorithm>
#include <cstdint>
#include <map>
#include <memory>
#include <set>

#include "oracle/explain/board_model.hpp"
#include "stimuli/stimulus.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t usual_samples = 4096;
constexpr std::int64_t impulse_samples = 128;
constexpr std::int64_t burst_samples = 512;
constexpr double soft_ratio = 1e-3;

StimulusWords shaped(const char* shape, std::int64_t length_samples) {
    StimulusWords words{shape, {}};
    words.values.set("length_samples", length_samples);
    return words;
}

StimulusWords at_ratio(StimulusWords words, double ratio) {
    words.values.set("level_ratio", ratio);
    return words;
}

StimulusWords in_sequence(std::vector<StimulusWords> parts) {
    StimulusWords words{"sequence", {}};
    words.values.set("parts", std::make_shared<const std::vector<StimulusWords>>(std::move(parts)));
    return words;
}

class ProbeMaker {
public:
    ProbeMaker(const Signal& signal, double peak_ratio) : signal_(signal), peak_ratio_(peak_ratio) {}

    std::vector<Probe> all() {
        const double peak = peak_ratio_;
        add("loud noise", at_ratio(shaped("noise", usual_samples), peak));
        add("noise of half that level", at_ratio(shaped("noise", usual_samples), peak / 2.0));
        add("soft noise", at_ratio(shaped("noise", usual_samples), std::min(soft_ratio, peak)));
        add("impulses of each power of two, of either sign", impulses());
        for (const double level : {peak / 2.0, -peak / 2.0}) {
            StimulusWords step = at_ratio(shaped("step", usual_samples), level);
            step.values.set("at_samples", std::int64_t{3});
            add(level > 0.0 ? "a step" : "a step below zero", std::move(step));
        }
        StimulusWords ramp = shaped("ramp", usual_samples);
        ramp.values.set("from_ratio", -peak);
        ramp.values.set("to_ratio", peak);
        add("a ramp through zero", std::move(ramp));
        StimulusWords square = at_ratio(shaped("square", usual_samples), peak);
        square.values.set("period_samples", usual_samples / 4);
        add("a slow square", std::move(square));
        add("a burst and then silence", in_sequence({at_ratio(shaped("noise", burst_samples), peak),
                                                     shaped("silence", usual_samples - burst_samples)}));
        return std::move(probes_);
    }

private:
    void add(const char* what, StimulusWords words) {
        const StimulusContext context{signal_.rate_hz, signal_.input, signal_.input_full_scale_unit};
        const auto stimulus = make_stimulus(words.shape, words.values, context);
        if (!stimulus) return;
        Probe probe{what, std::move(words), {}};
        probe.codes.resize(static_cast<std::size_t>((*stimulus)->length_samples()));
        fill_codes(**stimulus, signal_.input, signal_.quantise, 0, probe.codes);
        probes_.push_back(std::move(probe));
    }

    /// What makes odd coefficients ties, and the corner of two's complement.
    StimulusWords impulses() const {
        std::vector<StimulusWords> parts;
        if (!signal_.input.has_lsb()) {
            parts.push_back(at_ratio(shaped("impulse", usual_samples), peak_ratio_));
            return in_sequence(std::move(parts));
        }
        const int top_bit = signal_.input.word_bits - 1;
        const double full_scale = static_cast<double>(std::int64_t{1} << top_bit);
        for (int bit = 0; bit < top_bit; ++bit) {
            const double ratio = static_cast<double>(std::int64_t{1} << bit) / full_scale;
            if (ratio > peak_ratio_) break;
            for (const double level : {ratio, -ratio})
                parts.push_back(at_ratio(shaped("impulse", impulse_samples), level));
        }
        parts.push_back(at_ratio(shaped("impulse", impulse_samples), -peak_ratio_));
        return in_sequence(std::move(parts));
    }

    const Signal& signal_;
    double peak_ratio_;
    std::vector<Probe> probes_;
};

std::vector<Code> answer_of(BoardModel& board, const Probe& probe) {
    std::vector<Code> out;
    board.begin_case(Start::reset, 0);
    board.process(probe.codes, out);
    return out;
}

/// Boards that stand in one group have answered all probes alike.
using Groups = std::vector<std::size_t>;

Groups split(const Groups& groups, const std::vector<std::vector<Code>>& answers) {
    std::map<std::pair<std::size_t, std::vector<Code>>, std::size_t> numbers;
    Groups finer;
    for (std::size_t i = 0; i < groups.size(); ++i)
        finer.push_back(numbers.emplace(std::pair(groups[i], answers[i]), numbers.size()).first->second);
    return finer;
}

std::size_t count_of(const Groups& groups) { return std::set<std::size_t>(groups.begin(), groups.end()).size(); }

}  // namespace

std::vector<Probe> probes_for(const Signal& signal, double peak_ratio) { return ProbeMaker(signal, peak_ratio).all(); }

std::optional<std::string> separating_probe(const BoardDescription& a, const BoardDescription& b, const Signal& signal,
                                            const std::vector<Probe>& probes) {
    const auto first = BoardModel::make(a, signal), second = BoardModel::make(b, signal);
    if (first == nullptr || second == nullptr) return std::nullopt;
    for (const Probe& probe : probes) {
        const std::vector<Code> from_first = answer_of(*first, probe), from_second = answer_of(*second, probe);
        const auto count = static_cast<std::ptrdiff_t>(std::min(from_first.size(), from_second.size()));
        if (!std::equal(from_first.begin(), from_first.begin() + count, from_second.begin())) return probe.what;
    }
    return std::nullopt;
}

std::vector<std::size_t> separating_probes(const std::vector<BoardDescription>& boards, const Signal& signal,
                                           const std::vector<Probe>& probes) {
    std::vector<std::size_t> chosen;
    Groups groups(boards.size(), 0);
    while (chosen.size() < probes.size()) {
        std::optional<std::size_t> best;
        Groups best_groups = groups;
        for (std::size_t p = 0; p < probes.size(); ++p) {
            std::vector<std::vector<Code>> answers;
            for (const BoardDescription& description : boards) {
                const auto board = BoardModel::make(description, signal);
                for (const std::size_t before : chosen)
                    if (board != nullptr) answer_of(*board, probes[before]);
                answers.push_back(board == nullptr ? std::vector<Code>{} : answer_of(*board, probes[p]));
            }
            Groups finer = split(groups, answers);
            if (count_of(finer) <= count_of(best_groups)) continue;
            best = p;
            best_groups = std::move(finer);
        }
        if (!best) break;
        chosen.push_back(*best);
        groups = std::move(best_groups);
    }
    return chosen;
}

}  // namespace halflsb
