// Compensated summation (Neumaier 1974, "Rundungsfehleranalyse einiger Verfahren zur Summation
// endlicher Summen"): the error of the sum does not grow with the number of terms.
#pragma once

namespace halflsb {

class CompensatedSum {
public:
    void add(double term) {
        // The lost part by Knuth's (1969) branch-free formula: the same bits as Neumaier's two cases,
        // without a jump that noise would make unpredictable.
        const double sum = sum_ + term;
        const double used = sum - sum_;
        lost_ += (sum_ - (sum - used)) + (term - used);
        sum_ = sum;
    }
    /// All that another sum has had, in its place in the order.
    void add(const CompensatedSum& other) {
        add(other.sum_);
        lost_ += other.lost_;
    }
    double value() const { return sum_ + lost_; }

private:
    double sum_ = 0.0;
    double lost_ = 0.0;
};

}  // namespace halflsb
