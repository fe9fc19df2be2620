#include "oracle/explain/hypothesis.hpp"

#include <utility>

namespace halflsb {

std::string_view name_of(Slot slot) {
    switch (slot) {
        case Slot::filter:
            return "filter";
        case Slot::arithmetic:
            return "arithmetic";
        case Slot::input:
            return "input";
        case Slot::output:
            return "output";
        case Slot::passage:
            return "passage";
        case Slot::reset:
            return "reset";
        case Slot::channels:
            break;
    }
    return "channels";
}

double Hypothesis::price_bits() const {
    double bits = open_words_bits;
    for (const Change& change : changes) bits += change.price_bits;
    return bits;
}

std::string Hypothesis::what() const {
    std::string text;
    for (const Change& change : changes) text += (text.empty() ? "" : "; ") + change.what;
    return text;
}

void add_changed(const Hypothesis& from, Hypothesis made, Change change, std::vector<Hypothesis>& all) {
    if (made.board == from.board) return;
    const bool has_stage = change.slot == Slot::filter || change.slot == Slot::arithmetic;
    if (has_stage && from.board.filter.size() > 1)
        change.what = "stage " + std::to_string(change.stage + 1) + ": " + change.what;
    made.changes.push_back(std::move(change));
    all.push_back(std::move(made));
}

}  // namespace halflsb
