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
#include <vector>

#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/exact_count.hpp"
#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/reference_source.hpp"
#include "oracle/judge/verdict.hpp"
#include "oracle/judge/waiting_reference.hpp"
#include "oracle/measure/error.hpp"
#include "oracle/measure/response.hpp"

namespace halflsb {

class AlignedPass {
public:
    /// The plan and the case must outlive the pass; channels count from 1.
    /// `derived` are asked_limits() of the channel.
    AlignedPass(const Plan& plan, const Case& the_case, int channel, int lag_samples, const DerivedLimits& derived);
    void add(const ReferenceBlock& reference, std::span<const Code> response);

    int lag_samples() const { return lag_; }
    /// On a rule of the case: none for kinds other than error, exact and response, and for what says nothing of a
    /// channel that is not driven (a response rule, an error rule that limits only the SNR).
    /// `rails` are those of the reference that was added; derived limits need them.
    std::optional<RuleVerdict> verdict(const Rule& rule, const RailWatch* rails) const;
    /// Every error rule passes; true when the case has none.
    bool error_rules_pass(const RailWatch* rails) const;
    /// Some rule asks for it, and every sample equals the twin.
    bool is_exact() const { return exact_ && exact_->is_exact(); }
    bool has_error_rules() const { return !error_rules_.empty(); }

private:
    struct ErrorRuleState {
        const Rule* rule;
        ErrorMeasure measure;
        FirstBadWatch watch;
        bool is_derived = false;
        std::int64_t exempt = 0;  ///< samples of which derived limits claim nothing

        void add(std::int64_t first_index, const ReferenceBlock& reference, std::span<const Code> response,
                 std::span<const double> response_values);
    };
    bool says_something(const ErrorRule& rule) const;
    void measure_judged(const ReferenceBlock& reference, std::span<const Code> response);
    void measure(const ReferenceBlock& reference, std::span<const Code> response);
    RuleVerdict error_verdict(const ErrorRuleState& state, const RailWatch* rails) const;

    const Plan& plan_;
    const Case& case_;
    int channel_;
    bool is_driven_;
    int lag_;
    std::int64_t first_judged_;
    std::int64_t next_index_ = 0;  ///< of the next response sample that meets its partner
    std::vector<ErrorRuleState> error_rules_;
    DerivedLimits derived_;
    std::unique_ptr<ResponseMeasure> response_measure_;
    std::optional<ExactCount> exact_;
    // What waits for its partner.
    std::size_t to_skip_;
    WaitingReference waiting_;
    std::vector<Code> response_;
    std::vector<double> response_values_, design_error_;
};

}  // namespace halflsb
