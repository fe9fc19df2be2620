#include "oracle/explain/inference.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <set>
#include <utility>

#include "oracle/explain/open_words.hpp"

namespace halflsb {
namespace {

/// Descriptions that are kept from round to round, and rounds: each says at least one word more.
constexpr std::size_t kept = 8, most_rounds = 10;
/// What a bit of the price must be worth, in octaves of the error of all cases: words that mend by chance are not said.
constexpr double octaves_a_bit = 0.25;
/// What reproducing all samples is worth to those that reproduce the start of each case.
constexpr double octaves_of_all = 256.0;

/// Where no single word helps any more.
constexpr std::size_t most_begun_of_two = 3, most_pairs = 20'000, most_pairs_kept = 64;

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
            std::vector<Choices> next = best();
            if (next == begun) {  // no word alone comes nearer
                for (std::size_t i = 0; i < std::min(most_begun_of_two, begun.size()) && !found_; ++i)
                    say_two(begun[i]);
                next = best();
                if (next == begun) break;
            }
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
        if (!seen_.insert(choices).second) return;
        ++result_.tried;
        const double miss = captures_.miss_octaves(board_of(choices));
        if (!std::isfinite(miss)) return;
        double rank = miss + octaves_a_bit * price_bits(choices);
        if (captures_.is_exact_start(miss)) {
            const Candidate candidate = candidate_of(choices);
            if (candidate.fit.is_exact()) found_ = choices;
            // What goes on longer is nearer, whatever it costs.
            rank -= octaves_of_all * static_cast<double>(candidate.fit.equal) /
                    static_cast<double>(std::max<std::int64_t>(1, captures_.samples()));
        }
        ranked_.insert({rank, choices});
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

    /// Two words together, from where no single one helps: all pairs by the first case, the nearest of them by all.
    void say_two(const Choices& from) {
        std::multimap<double, Choices> nearest;
        for (std::size_t a = 0; a < words_.size(); ++a) {
            for (std::size_t b = a + 1; b < words_.size(); ++b) {
                if (words_[a].choices.size() * words_[b].choices.size() > most_pairs) continue;
                Choices choices = from;
                for (choices[a] = 0; choices[a] < words_[a].choices.size(); ++choices[a]) {
                    if (!goes()) return;
                    if (choices[a] == from[a]) continue;
                    for (choices[b] = 0; choices[b] < words_[b].choices.size(); ++choices[b]) {
                        if (choices[b] == from[b]) continue;
                        ++result_.tried;
                        const double miss = captures_.first_miss_octaves(board_of(choices));
                        if (!std::isfinite(miss)) continue;
                        nearest.insert({miss + octaves_a_bit * price_bits(choices), choices});
                        if (nearest.size() > most_pairs_kept) nearest.erase(std::prev(nearest.end()));
                    }
                }
            }
        }
        for (const auto& [rank, choices] : nearest) {
            if (found_ || !goes()) return;
            look_at(choices);
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
        result_.fitting = candidate_of(shortest);
    }

    const BoardDescription& plan_;
    CaptureSet& captures_;
    const std::function<bool()>& go_on_;
    std::vector<OpenWord> words_;
    std::set<Choices> seen_;
    std::multimap<double, Choices> ranked_;  ///< by miss and price
    std::optional<Choices> found_;
    Inference result_;
};

}  // namespace

Inference infer_arithmetic(const BoardDescription& plan, CaptureSet& captures, const std::function<bool()>& go_on) {
    return Inferring(plan, captures, go_on).run();
}

}  // namespace halflsb
