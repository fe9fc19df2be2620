// One pass over a channel of a case at one lag: response sample n is held against reference sample n - lag.
//
// Lags count the response behind the reference. Before its start the reference is silent, so with a
// positive lag the first samples are held against zero; with a negative lag the last samples of the
// response have no partner and are left out. Of a running case a pair counts only when both of its samples
// come after the discard: neither board nor reference has settled before. Indices are those of the response.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <span>
#include <variant>
#include <vector>

#include "oracle/judge/rule_judge.hpp"
#include "oracle/judge/time_trace.hpp"
#include "oracle/judge/waiting_reference.hpp"

namespace halflsb {

class AlignedPass {
public:
    /// Plan and case must outlive the pass.
    AlignedPass(const JudgedChannel& channel, int lag_samples);
    void add(const ReferenceBlock& reference, std::span<const Code> response);
    /// No more samples follow. Once, before any verdict.
    void finish();

    /// Nothing that may follow changes a verdict.
    bool is_decided() const;
    /// On a rule of the case; none where it says nothing of this channel or is judged elsewhere (rule_kinds.hpp).
    /// `rails` are those of the reference that was added; derived limits need them.
    std::optional<RuleVerdict> verdict(const Rule& rule, const RailWatch* rails) const;
    /// Appends the plots of the samples and of the rules, where they are wanted.
    void plot(CasePlots& plots) const;
    /// There are rules of the kind, and each passes.
    template <class Kind>
    bool passes(const RailWatch* rails) const {
        bool has_some = false;
        for (const Judged& judged : judges_) {
            if (!std::holds_alternative<Kind>(judged.rule->kind)) continue;
            if (judged.judge->verdict(rails).verdict != Verdict::pass) return false;
            has_some = true;
        }
        return has_some;
    }

private:
    struct Judged {
        const Rule* rule;
        std::unique_ptr<RuleJudge> judge;
    };
    void measure_judged(const ReferenceBlock& reference, std::span<const Code> response);
    void measure(const ReferenceBlock& reference, std::span<const Code> response);

    const Signal& signal_;
    int lag_;
    std::int64_t first_judged_;
    std::int64_t next_index_ = 0;  ///< of the next response sample that meets its partner
    std::vector<Judged> judges_;
    std::optional<TimeTrace> trace_;
    // What waits for its partner.
    std::size_t to_skip_, silence_;
    WaitingReference waiting_;
    std::vector<Code> response_;
    std::vector<double> response_values_;
};

}  // namespace halflsb
