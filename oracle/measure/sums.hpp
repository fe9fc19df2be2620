// Compensated summation (Neumaier 1974, "Rundungsfehleranalyse einiger Verfahren zur Summation
// endlicher Summen"): the error of the sum does not grow with the number of terms.
#pragma once

#include <cmath>

namespace halflsb {

class CompensatedSum {
public:
    void add(double term) {
        const double sum = sum_ + term;
        if (std::fabs(sum_) >= std::fabs(term)) {
            lost_ += (sum_ - sum) + term;
        } else {
            lost_ += (term - sum) + sum_;
        }
        sum_ = sum;
    }
    double value() const { return sum_ + lost_; }

private:
    double sum_ = 0.0;
    double lost_ = 0.0;
};

}  // namespace halflsb
