// Judges the rule `unchanged`: the response of a case, all channels, equals that of an accepted run.
//
// The hash over all codes decides; the codes that the baseline keeps (the first ones of a long case) say where the
// first difference lies and how large it is, and beyond them the hashes of stretches say in which one it begins.
// With max_lsb the kept codes decide, as far as they reach. A pass needs an equal stimulus, an equal number of
// samples, and an equal hash; or, with max_lsb, codes that show every difference. Memory hangs on the channels
// alone; the baseline's is the caller's.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"
#include "oracle/judge/verdict.hpp"

namespace halflsb {

class UnchangedJudge {
public:
    /// Plan, case and rule must outlive the judge; the rule's kind is UnchangedRule.
    UnchangedJudge(const Plan& plan, const Case& the_case, const Rule& rule);
    /// The next instants, from 0 on, a code a channel, adjacent: as many codes sent as returned.
    void add(std::span<const Code> sent, std::span<const Code> response);
    /// After the last sample; only once, as a digest has its value only once.
    RuleVerdict verdict();

private:
    std::string why_not_comparable() const;
    bool is_beyond(std::int64_t difference_lsb) const;
    void compare_kept(std::span<const Code> response);
    void compare_instant(std::int64_t index, std::span<const Code> codes);
    void compare_stretches(std::int64_t index, std::span<const Code> response);
    std::string contradiction(bool is_same) const;
    void judge_exactly(bool is_same, RuleVerdict& verdict) const;
    void judge_within(bool is_same, RuleVerdict& verdict) const;
    bool keeps_all() const { return kept_ == samples_; }
    std::string differences_text() const;
    std::string beyond_kept_text() const;
    Neighbourhood around_bad() const;

    const Plan& plan_;
    const Case& case_;
    const Rule& rule_;
    const UnchangedRule& asked_;
    std::size_t channels_;
    std::string not_comparable_;       ///< why; "" when the baseline can be held against
    std::optional<double> limit_lsb_;  ///< none: bit for bit
    std::int64_t kept_ = 0;            ///< instants
    std::unique_ptr<CodeDigest> sent_digest_, response_digest_, stretch_digest_;
    std::int64_t samples_ = 0;  ///< instants that came

    std::int64_t changed_ = 0;      ///< kept instants that differ
    std::int64_t largest_lsb_ = 0;  ///< difference of codes
    std::int64_t bad_index_ = -1;   ///< the first instant that differs, or differs by more than the limit
    std::size_t bad_channel_ = 0;   ///< counted from 0
    std::vector<Code> around_;      ///< instants up to the newest, or to the last neighbour of the bad one
    std::int64_t around_first_ = 0;
    /// The first stretch that differs and reaches beyond the kept instants, from the first of it that is not kept.
    std::int64_t stretch_first_ = -1, stretch_last_ = -1;
};

/// The first samples of a running case hang on the case before, and the hash of an accepted run is over all of them.
void check(const UnchangedRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
