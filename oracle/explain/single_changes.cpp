#include "oracle/explain/single_changes.hpp"

#include <algorithm>

#include "oracle/explain/arithmetic_changes.hpp"
#include "oracle/explain/coefficient_changes.hpp"
#include "oracle/explain/filter_changes.hpp"

namespace halflsb {
namespace {

void append(std::vector<Hypothesis>& all, std::vector<Hypothesis> more) {
    for (Hypothesis& each : more) all.push_back(std::move(each));
}

void add_code_maps(const Hypothesis& from, const Signal& signal, std::vector<Hypothesis>& all) {
    if (from.board.input.kind == CodeMapKind::none) {
        for (const NamedCodeMap& each : code_maps_of(signal.input)) {
            Hypothesis made = from;
            made.board.input = each.map;
            made.changes.push_back({Slot::input, 0, "at the input: " + each.what,
                                    "how the samples get from the driver into the filter's type", each.price_bits});
            all.push_back(std::move(made));
        }
    }
    if (from.board.output.kind == CodeMapKind::none) {
        for (const NamedCodeMap& each : code_maps_of(signal.output)) {
            Hypothesis made = from;
            made.board.output = each.map;
            made.changes.push_back({Slot::output, 0, "at the output: " + each.what,
                                    "how the filter's results get into the words that are sent", each.price_bits});
            all.push_back(std::move(made));
        }
    }
}

void add_passages(const Hypothesis& from, std::vector<Hypothesis>& all) {
    if (from.board.passage.kind != PassageKind::plain) return;
    const auto add = [&](const Passage& passage, std::string what, std::string look_at, double price_bits) {
        Hypothesis made = from;
        made.board.passage = passage;
        made.changes.push_back({Slot::passage, 0, std::move(what), std::move(look_at), price_bits});
        all.push_back(std::move(made));
    };
    constexpr int most_late = 8;
    for (int late = 1; late <= most_late; ++late) {
        add({PassageKind::late, late, 0, 0},
            "each output " + std::to_string(late) + (late == 1 ? " sample late" : " samples late"),
            "whether the result of this call or of the one before is sent, and the hand-over of the input", 4.0 + late);
    }
    for (int each = 2; each <= 4; ++each) {
        for (int phase = 0; phase < each; ++phase) {
            add({PassageKind::each_nth, each, phase, 0},
                "the filter is called with each " + std::to_string(each) +
                    (each == 2   ? "nd"
                     : each == 3 ? "rd"
                                 : "th") +
                    " sample, its output repeated",
                "the condition under which the filter is called", 6.0 + each);
        }
        add({PassageKind::twice, each, 0, 0},
            "the filter is called " + std::to_string(each) + " times with each sample",
            "how often the filter is called", 6.0 + each);
    }
}

void add_resets(const Hypothesis& from, std::vector<Hypothesis>& all) {
    if (from.board.reset != ResetKind::whole) return;
    const auto add = [&](ResetKind kind, std::string what, double price_bits) {
        Hypothesis made = from;
        made.board.reset = kind;
        made.changes.push_back(
            {Slot::reset, 0, std::move(what), "what a reset clears, and how much of it", price_bits});
        all.push_back(std::move(made));
    };
    add(ResetKind::none, "a reset leaves the state as it was", 5.0);
    add(ResetKind::first_half, "a reset clears only the inputs that are kept, or the first half of the state", 6.0);
    add(ResetKind::second_half, "a reset clears only the second half of the state", 6.5);
    add(ResetKind::all_but_sum, "a reset clears all but the last word of the state, such as a running sum", 6.5);
}

}  // namespace

std::vector<Hypothesis> single_changes(const Hypothesis& from, const Signal& signal) {
    std::vector<Hypothesis> all = arithmetic_changes(from, signal);
    append(all, filter_changes(from));
    append(all, coefficient_changes(from));
    add_code_maps(from, signal, all);
    add_passages(from, all);
    add_resets(from, all);
    std::stable_sort(all.begin(), all.end(),
                     [](const Hypothesis& a, const Hypothesis& b) { return a.price_bits() < b.price_bits(); });
    return all;
}

}  // namespace halflsb
