#include "oracle/filters/comb.hpp"

#include <algorithm>

namespace halflsb {

CombFilter::CombFilter(const Comb& design)
    : design_(design),
      past_in_(static_cast<std::size_t>(design.delay_samples), 0.0),
      past_out_(static_cast<std::size_t>(design.delay_samples), 0.0) {}

void CombFilter::reset() {
    std::fill(past_in_.begin(), past_in_.end(), 0.0);
    std::fill(past_out_.begin(), past_out_.end(), 0.0);
    place_ = 0;
}

void CombFilter::process(std::span<const double> in, std::span<double> out) {
    for (std::size_t i = 0; i < in.size(); ++i) {
        const double x = in[i];
        const double y = design_.direct * x + design_.forward * past_in_[place_] - design_.feedback * past_out_[place_];
        past_in_[place_] = x;
        past_out_[place_] = y;
        place_ = place_ + 1 == past_in_.size() ? 0 : place_ + 1;
        out[i] = y;
    }
}

}  // namespace halflsb
