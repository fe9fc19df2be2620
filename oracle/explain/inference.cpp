#include "oracle/explain/inference.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <utility>

#include "oracle/explain/open_words.hpp"

namespace halflsb {
namespace {

/// Descriptions that are kept from round to round, and rounds: each says at least one word more.
constexpr std::size_t kept = 8, most_rounds = 10;
/// What a bit of the price must be worth, in octaves of the error of all cases: words that mend by chance are not said.
constexpr double octaves_a_bit = 0.25;

/// Which choice of each word.
using Choices = std::vector<std::size_t>;

class Inferring {
public:
    Inferring(const BoardDescription& plan, CaptureSet& captures, const std::function<bool()>& go_on)
        : plan_(plan), captures_(captures), go_on_(go_on), words_(open_words(plan.filter, captures.signal())) {}

    Inference run() {
        captures_.order_by_variety();
        const Choices none(words_.size(), 0);
        look_at(none);
        std::vector<Choices> begun{none};
        for (std::size_t round = 0; round < most_rounds && !found_ && goes(); ++round) {
            for (const Choices& from : begun) {
                if (found_) break;
                say_one(from);
            }
            const std::vector<Choices> next = best();
            if (next == begun) break;  // nothing came nearer
            begun = next;
        }
        if (found_) {
            shorten();
        } else {
            for (const Choices& choices : best()) result_.nearest.push_back(candidate_of(choices));
        }
        return std::move(result_);
    }

private:
    bool goes() {
        if (!result_.was_cut) result_.was_cut = !go_on_();
        return !result_.was_cut;
    }

    BoardDescription board_of(const Choices& choices) const {
        BoardDescription board = plan_;
        for (std::size_t word = 0; word < words_.size(); ++word)
            words_[word].choices[choices[word]].say(board.filter[words_[word].stage]);
        return board;
    }

    double price_bits(const Choices& choices) const {
        double bits = 0.0;
        for (std::size_t word = 0; word < words_.size(); ++word) bits += words_[word].choices[choices[word]].price_bits;
        return bits;
    }

    Candidate candidate_of(const Choices& choices) const {
        Candidate candidate;
        candidate.hypothesis.board = board_of(choices);
        candidate.hypothesis.open_words_bits = price_bits(choices);
        candidate.fit = captures_.until_first_wrong(candidate.hypothesis.board);
        return candidate;
    }

    void look_at(const Choices& choices) {
        if (misses_.count(choices) != 0) return;
        ++result_.tried;
        const double miss = captures_.miss_octaves(board_of(choices));
        misses_[choices] = miss;
        if (std::isfinite(miss)) ranked_.insert({miss + octaves_a_bit * price_bits(choices), choices});
        if (captures_.is_exact_start(miss) && candidate_of(choices).fit.is_exact()) found_ = choices;
    }

    void say_one(const Choices& from) {
        for (std::size_t word = 0; word < words_.size(); ++word) {
            if (!goes()) return;
            Choices choices = from;
            for (std::size_t i = 0; i < words_[word].choices.size() && !found_; ++i) {
                choices[word] = i;
                look_at(choices);
            }
        }
    }

    std::vector<Choices> best() {
        std::vector<Choices> all;
        for (const auto& [rank, choices] : ranked_) {
            if (all.size() == kept) break;
            all.push_back(choices);
        }
        return all;
    }

    /// Words that make no difference to the captures are not believed.
    void shorten() {
        Choices shortest = *found_;
        for (bool again = true; again && goes();) {
            again = false;
            for (std::size_t word = 0; word < words_.size(); ++word) {
                for (std::size_t i = 0; i < shortest[word]; ++i) {
                    Choices choices = shortest;
                    choices[word] = i;
                    ++result_.tried;
                    if (!candidate_of(choices).fit.is_exact()) continue;
                    shortest = choices;
                    again = true;
                    break;
                }
            }
        }
        result_.fitting.push_back(candidate_of(shortest));
    }

    const BoardDescription& plan_;
    CaptureSet& captures_;
    const std::function<bool()>& go_on_;
    std::vector<OpenWord> words_;
    std::map<Choices, double> misses_;
    std::multimap<double, Choices> ranked_;  ///< by miss and price
    std::optional<Choices> found_;
    Inference result_;
};

}  // namespace

Inference infer_arithmetic(const BoardDescription& plan, CaptureSet& captures, const std::function<bool()>& go_on) {
    return Inferring(plan, captures, go_on).run();
}

}  // namespace halflsb
