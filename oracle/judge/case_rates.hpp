// How the instants that a case sends and those that come back belong together, where the filter changes the rate.
//
// "Sent" are instants at the input's rate, "returned" those of the response. Every rule counts returned ones: lags,
// indices, what is discarded. One for one unless a stage of the chain changes the rate.
#pragma once

#include <cstdint>

#include "oracle/filters/rates.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

/// The longest rate cycle, in instants on either side, that a plan may have: blocks are judged in whole cycles, and a
/// board tells its own in 16 bits.
inline constexpr std::int64_t longest_rate_cycle_samples = 65535;

/// That of channel 1, which all have.
RateCycle rate_cycle_of(const Plan& plan);

class CaseRates {
public:
    /// Of channel 1; same_rates() says whether that is all of them.
    CaseRates(const Plan& plan, const Case& the_case);

    /// Some stage changes the rate, even when a later one takes it back.
    bool changes() const { return !stages_.empty(); }
    RateRatio ratio() const { return rate_ratio(stages_); }
    /// After so many sent, so many have been returned and all begins anew.
    const RateCycle& cycle() const { return cycle_; }
    /// How many have been returned once `sent` were, counted from a reset.
    std::int64_t returned(std::int64_t sent) const { return outputs_after(stages_, sent); }
    /// The last one sent when that one was returned, by index.
    std::int64_t newest_sent(std::int64_t returned_index) const;
    /// How many to send, in whole cycles, for at least so many back.
    std::int64_t sent_for(std::int64_t returned) const;
    /// `sent` rounded up to whole cycles, at least one.
    std::int64_t whole_cycles(std::int64_t sent) const;
    /// As many cycles as keep both sides within `samples`, at least one.
    std::int64_t cycles_within(std::int64_t samples) const;

private:
    FilterChain stages_;  ///< those that change the rate
    RateCycle cycle_;
};

/// Every channel passes the same changes of the rate, in the same order.
bool same_rates(const Plan& plan, const Case& the_case);

/// Index of the first returned sample that a rule may look at: behind start_samples of a running case, else 0.
std::int64_t first_judged_sample(const Plan& plan, const Case& the_case);
/// How many are returned from that one on; 0 when all are discarded.
std::int64_t judged_samples(const Plan& plan, const Case& the_case);
/// How many are returned in all.
std::int64_t returned_samples(const Plan& plan, const Case& the_case);
/// Rate of the response over that of the stimulus.
double returned_per_sent(const Plan& plan, const Case& the_case);
/// Instants a second of the response.
double returned_rate_hz(const Plan& plan, const Case& the_case);

}  // namespace halflsb
