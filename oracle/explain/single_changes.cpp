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
    const auto add = [&](Slot slot, CodeMap BoardDescription::*map, const SampleFormat& format, const char* where,
                         const char* look_at) {
        if ((from.board.*map).kind != CodeMapKind::none) return;
        for (const NamedCodeMap& each : code_maps_of(format)) {
            Hypothesis made = from;
            made.board.*map = each.map;
            add_changed(from, std::move(made), {slot, 0, where + each.what, look_at, each.price_bits}, all);
        }
    };
    add(Slot::input, &BoardDescription::input, signal.input,
        "at the input: ", "how the samples get from the driver into the filter's type");
    add(Slot::output, &BoardDescription::output, signal.output,
        "at the output: ", "how the filter's results get into the words that are sent");
}

void add_passages(const Hypothesis& from, std::vector<Hypothesis>& all) {
    if (from.board.passage.kind != PassageKind::plain) return;
    const auto add = [&](const Passage& passage, std::string what, const char* look_at, double price_bits) {
        Hypothesis made = from;
        made.board.passage = passage;
        add_changed(from, std::move(made), {Slot::passage, 0, std::move(what), look_at, price_bits}, all);
    };
    constexpr int most_late = 8;
    for (int late = 1; late <= most_late; ++late) {
        add({PassageKind::late, late, 0, 0},
            "each output " + std::to_string(late) + (late == 1 ? " sample late" : " samples late"),
            "whether the result of this call or of the one before is sent, and the hand-over of the input", 4.0 + late);
    }
    for (int each = 2; each <= 4; ++each) {
        const char* const ordinal = each == 2 ? "nd" : each == 3 ? "rd" : "th";
        for (int phase = 0; phase < each; ++phase) {
            add({PassageKind::each_nth, each, phase, 0},
                "the filter is called with each " + std::to_string(each) + ordinal + " sample, its output repeated",
                "the condition under which the filter is called", 6.0 + each);
        }
        add({PassageKind::twice, each, 0, 0},
            "the filter is called " + std::to_string(each) + " times with each sample",
            "how often the filter is called", 6.0 + each);
    }
}

void add_resets(const Hypothesis& from, std::vector<Hypothesis>& all) {
    if (from.board.reset != ResetKind::whole) return;
    for (const NamedReset& each : resets_of(from.board.filter)) {
        // Second changes have enough to try.
        if (each.kind == ResetKind::ring_places && !from.changes.empty()) continue;
        Hypothesis made = from;
        made.board.reset = each.kind;
        made.board.reset_places = each.places;
        add_changed(from, std::move(made),
                    {Slot::reset, 0, each.what, "what a reset clears, and how much of it", each.price_bits}, all);
    }
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
