#include "oracle/explain/finding.hpp"

#include <algorithm>

#include "oracle/arithmetic/described.hpp"
#include "oracle/explain/inference.hpp"
#include "oracle/explain/open_words.hpp"

namespace halflsb {
namespace {

/// Arithmetics that a search for faults begins with where none fits.
constexpr std::size_t most_begun = 3;

FindingKind kind_of(const SearchResult& search) {
    if (search.declared.fit.is_exact()) return FindingKind::as_declared;
    if (search.classes.empty()) return FindingKind::unknown;
    return search.classes.size() == 1 ? FindingKind::found : FindingKind::several;
}

Finding search_from(const Hypothesis& declared, CaptureSet& captures, const std::function<bool()>& go_on) {
    Finding finding;
    finding.search = search(declared, captures, go_on);
    finding.kind = kind_of(finding.search);
    return finding;
}

/// What the plan leaves open is no change of it: the price stays, the words are those of the board.
void take_as_said(Hypothesis& hypothesis) {
    for (const Change& change : hypothesis.changes)
        if (change.slot == Slot::arithmetic) hypothesis.open_words_bits += change.price_bits;
    std::erase_if(hypothesis.changes, [](const Change& change) { return change.slot == Slot::arithmetic; });
}

/// Of members that came to the same changes the cheapest stays.
void take_as_said(SearchResult& search) {
    for (EquivalenceClass& cause : search.classes) {
        std::vector<Candidate> kept;
        for (Candidate& member : cause.members) {
            take_as_said(member.hypothesis);
            const std::string what = member.hypothesis.what();
            const bool is_new = std::none_of(kept.begin(), kept.end(),
                                             [&](const Candidate& other) { return other.hypothesis.what() == what; });
            if (is_new) kept.push_back(std::move(member));
        }
        cause.members = std::move(kept);
    }
    if (search.nearest) take_as_said(search.nearest->hypothesis);
}

Finding infer(const BoardDescription& plan, CaptureSet& captures, const std::function<bool()>& go_on) {
    Inference inference = infer_arithmetic(plan, captures, go_on);
    Finding finding;
    std::int64_t tried = inference.tried;
    bool was_cut = inference.was_cut;
    if (inference.fitting) {
        finding.kind = FindingKind::as_declared;
        finding.search.declared = std::move(*inference.fitting);
    }
    const std::size_t begun = inference.fitting ? 0 : std::min(most_begun, inference.nearest.size());
    for (std::size_t i = 0; i < begun; ++i) {
        Finding next = search_from(inference.nearest[i].hypothesis, captures, go_on);
        tried += next.search.tried;
        was_cut = was_cut || next.search.was_cut;
        const bool is_explained = next.kind != FindingKind::unknown;
        if (i == 0 || is_explained) finding = std::move(next);
        if (is_explained || was_cut) break;
    }
    take_as_said(finding.search);
    finding.is_inferred = true;
    finding.search.tried = tried;
    finding.search.was_cut = was_cut;
    return finding;
}

}  // namespace

std::string_view name_of(FindingKind kind) {
    switch (kind) {
        case FindingKind::as_declared:
            return "as declared";
        case FindingKind::found:
            return "found";
        case FindingKind::several:
            return "several";
        case FindingKind::unknown:
            return "unknown";
        case FindingKind::no_twin:
            break;
    }
    return "no twin";
}

Finding find_cause(const BoardDescription& plan, CaptureSet& captures, const std::function<bool()>& go_on) {
    const Signal& signal = captures.signal();
    const auto described = describe(plan.filter, signal.input, signal.output, signal.output_per_input).described;
    Finding finding;
    if (described && !described->missing) {
        finding = search_from({plan, {}, 0.0}, captures, go_on);
    } else if (described && !open_words(plan.filter, signal).empty()) {
        finding = infer(plan, captures, go_on);
    }
    // Something else than an open word is missing when nothing of all that could run.
    if (!finding.search.declared.fit.could_run) {
        Finding nothing;
        nothing.kind = FindingKind::no_twin;
        if (described && described->missing) nothing.missing = described->missing->error;
        return nothing;
    }
    if (finding.kind == FindingKind::unknown || finding.kind == FindingKind::several)
        finding.symptoms = symptoms_of(finding.search.declared.hypothesis.board, captures);
    if (finding.kind == FindingKind::unknown) {
        if (const auto order = linear_order(plan.filter))
            finding.linear = fit_linear(captures, order->feed_forward, order->feedback);
    }
    return finding;
}

}  // namespace halflsb
