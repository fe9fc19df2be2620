// A comb: one tap forward and one back at the same delay.
#pragma once

#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

class CombFilter final : public Filter {
public:
    explicit CombFilter(const Comb& design);
    void reset() override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    Comb design_;
    std::vector<double> past_in_, past_out_;  ///< rings of delay_samples
    std::size_t place_ = 0;
};

}  // namespace halflsb
