// When to look at a growing record, and what each look may spend of the error probabilities, so that all of them
// together keep alpha and beta.
//
// Alpha spending (Lan and DeMets 1983), in the form that asks nothing of how the looks depend on each other: each look
// is a test of its own at its share, and the shares add up to the whole (Bonferroni). The record grows by a factor
// between looks, so there are few, and a share costs little: 1e-6 over 25 looks moves the normal quantile from 4.75
// to 5.41. The intervals at the shares are repeated confidence intervals (Jennison and Turnbull 1989): together they
// hold the true value at every look.
#pragma once

#include <cstddef>
#include <cstdint>
#include <vector>

namespace halflsb {

class RepeatedLooks {
public:
    /// Looks at `first`, then each time the record has grown by a quarter, in steps of `step` samples, and at `budget`.
    /// 1 <= first, step; a budget below `first` has one look, at its end.
    RepeatedLooks(std::int64_t first_samples, std::int64_t step_samples, std::int64_t budget_samples);

    /// Ascending; the last is the budget.
    const std::vector<std::int64_t>& at_samples() const { return at_samples_; }
    /// What one look may spend of a probability.
    double share_of(double probability) const { return probability / static_cast<double>(at_samples_.size()); }

private:
    std::vector<std::int64_t> at_samples_;
};

/// Samples that a test at one length, fixed beforehand, needs to tell a value on the limit from one `delta` beyond,
/// when the estimate's standard deviation after `samples` is `deviation`, and falls with their square root: n =
/// (z_alpha + z_beta)^2 deviation^2 samples / delta^2.
double fixed_length_samples(double alpha, double beta, double delta, double deviation, double samples);

}  // namespace halflsb
