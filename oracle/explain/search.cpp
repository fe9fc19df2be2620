#include "oracle/explain/search.hpp"

#include <algorithm>

#include "oracle/explain/event_search.hpp"
#include "oracle/explain/identified_changes.hpp"
#include "oracle/explain/probes.hpp"
#include "oracle/explain/single_changes.hpp"

namespace halflsb {
namespace {

/// How many boards of one change a second one is put on, those that reproduce most first.
constexpr std::size_t most_begun = 60;
/// Members of a class, and classes, that anybody reads.
constexpr std::size_t most_members = 16, most_classes = 8;

class Search {
public:
    Search(const Hypothesis& declared, CaptureSet& captures, const std::function<bool()>& go_on)
        : declared_(declared), captures_(captures), go_on_(go_on) {}

    SearchResult run() {
        captures_.order_by(declared_.board);
        result_.declared = {declared_, captures_.until_first_wrong(declared_.board)};
        result_.has_twin = result_.declared.fit.could_run;
        if (result_.declared.fit.is_exact()) return std::move(result_);
        ones();
        if (exact_.empty()) twos();
        classify();
        return std::move(result_);
    }

private:
    bool go_on() {
        const bool goes = go_on_();
        result_.was_cut = result_.was_cut || !goes;
        return goes;
    }

    void try_all(std::vector<Hypothesis> hypotheses, std::vector<Candidate>* others) {
        for (Hypothesis& each : hypotheses) {
            if (!go_on()) return;
            ++result_.tried;
            Candidate candidate{std::move(each), {}};
            candidate.fit = captures_.until_first_wrong(candidate.hypothesis.board);
            if (!candidate.fit.could_run) continue;
            if (candidate.fit.is_exact()) {
                exact_.push_back(std::move(candidate));
                continue;
            }
            if (!result_.nearest || candidate.fit.equal > result_.nearest->fit.equal) result_.nearest = candidate;
            if (others != nullptr) others->push_back(std::move(candidate));
        }
    }

    void ones() {
        try_all(single_changes(declared_, captures_.signal()), &begun_);
        try_all(event_hypotheses(declared_, captures_, go_on_), nullptr);
        if (exact_.empty()) try_all(identified_changes(declared_, captures_), &begun_);
    }

    void twos() {
        std::stable_sort(begun_.begin(), begun_.end(),
                         [](const Candidate& a, const Candidate& b) { return a.fit.equal > b.fit.equal; });
        if (begun_.size() > most_begun) begun_.resize(most_begun);
        for (const Candidate& first : begun_) {
            if (!go_on()) return;
            try_all(single_changes(first.hypothesis, captures_.signal()), nullptr);
            try_all(event_hypotheses(first.hypothesis, captures_, go_on_), nullptr);
        }
    }

    void classify() {
        std::stable_sort(exact_.begin(), exact_.end(), [](const Candidate& a, const Candidate& b) {
            return a.hypothesis.price_bits() < b.hypothesis.price_bits();
        });
        const std::vector<Probe> probes = probes_for(captures_.signal());
        for (Candidate& each : exact_) {
            std::string separated_by;
            bool is_placed = false;
            for (EquivalenceClass& other : result_.classes) {
                const auto probe = separating_probe(other.members.front().hypothesis.board, each.hypothesis.board,
                                                    captures_.signal(), probes);
                if (!probe) {
                    if (other.members.size() < most_members) other.members.push_back(std::move(each));
                    is_placed = true;
                    break;
                }
                if (separated_by.empty()) separated_by = *probe;
            }
            if (is_placed || result_.classes.size() >= most_classes) continue;
            result_.classes.push_back({{std::move(each)}, separated_by});
        }
    }

    const Hypothesis& declared_;
    CaptureSet& captures_;
    const std::function<bool()>& go_on_;
    SearchResult result_;
    std::vector<Candidate> exact_, begun_;
};

}  // namespace

SearchResult search(const Hypothesis& declared, CaptureSet& captures, const std::function<bool()>& go_on) {
    return Search(declared, captures, go_on).run();
}

}  // namespace halflsb
