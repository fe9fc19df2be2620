// One pass over a case at one lag: response sample n is held against reference sample n - lag.
//
// Lags count the response behind the reference. Before its start the reference is silent, so with a
// positive lag the first samples are held against zero; with a negative lag the last samples of the
// response have no partner and are left out.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <span>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/reference_source.hpp"
#include "oracle/judge/verdict.hpp"
#include "oracle/measure/error.hpp"
#include "oracle/measure/response.hpp"

namespace halflsb {

/// Keeps the codes around the first sample that is beyond a limit.
class FirstBadWatch {
public:
    static constexpr std::int64_t neighbours = 4;  ///< on either side
    explicit FirstBadWatch(double reference_step) : reference_step_(reference_step) {}
    /// `first_beyond` as the error measure has it after this block; -1 while there is none.
    void add(std::int64_t first_index, std::span<const Code> stimulus, std::span<const double> reference,
             std::span<const Code> response, std::int64_t first_beyond);
    const std::optional<Neighbourhood>& found() const { return found_; }

private:
    double reference_step_;
    std::optional<Neighbourhood> found_;
    Neighbourhood recent_;  ///< the last samples seen while nothing is found
};

class AlignedPass {
public:
    /// The plan and the case must outlive the pass.
    AlignedPass(const Plan& plan, const Case& the_case, int lag_samples);
    void add(const ReferenceBlock& reference, std::span<const Code> response);

    int lag_samples() const { return lag_; }
    /// Verdicts of the case's error and response rules, in their order; the latency rule is left out.
    std::vector<RuleVerdict> verdicts() const;
    /// Every error rule passes; true when the case has none.
    bool error_rules_pass() const;
    bool has_error_rules() const { return !error_rules_.empty(); }

private:
    struct ErrorRuleState {
        const Rule* rule;
        ErrorMeasure measure;
        FirstBadWatch watch;
    };
    void measure(std::span<const Code> codes, std::span<const double> stimulus, std::span<const double> declared,
                 std::span<const double> design, std::span<const Code> response);
    RuleVerdict error_verdict(const ErrorRuleState& state) const;

    const Plan& plan_;
    const Case& case_;
    int lag_;
    std::int64_t next_index_ = 0;
    std::vector<ErrorRuleState> error_rules_;
    std::unique_ptr<ResponseMeasure> response_measure_;
    // What waits for its partner.
    std::size_t to_skip_;
    std::vector<Code> codes_, response_;
    std::vector<double> stimulus_, declared_, design_;
    std::vector<double> response_values_, design_error_;
};

}  // namespace halflsb
