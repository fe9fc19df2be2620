#include "oracle/filters/comb.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

namespace {

// What is fed back stops here, before it gets subnormal and slow; beyond notice in any format. Asked for each
// sample, so block bounds do not matter, and written so that a NaN goes on.
constexpr double vanished = 1e-200;
double or_nothing(double value) { return std::fabs(value) < vanished ? 0.0 : value; }

}  // namespace

CombFilter::CombFilter(const Comb& design)
    : design_(design),
      past_in_(static_cast<std::size_t>(design.delay_samples), 0.0),
      past_out_(static_cast<std::size_t>(design.delay_samples), 0.0) {}

void CombFilter::reset() { preload(0.0); }

void CombFilter::preload(double value) {
    std::fill(past_in_.begin(), past_in_.end(), value);
    const double output = value * (design_.direct + design_.forward) / (1.0 + design_.feedback);
    std::fill(past_out_.begin(), past_out_.end(), or_nothing(output));
    place_ = 0;
}

void CombFilter::process(std::span<const double> in, std::span<double> out) {
    const Comb taps = design_;
    for (std::size_t done = 0; done < in.size();) {
        // Up to the end of the rings in one go.
        const std::size_t count = std::min(in.size() - done, past_in_.size() - place_);
        double* const ring_in = past_in_.data() + place_;
        double* const ring_out = past_out_.data() + place_;
        for (std::size_t i = 0; i < count; ++i) {
            const double x = in[done + i];
            const double y = taps.direct * x + taps.forward * ring_in[i] - taps.feedback * ring_out[i];
            ring_in[i] = x;
            ring_out[i] = or_nothing(y);
            out[done + i] = y;
        }
        done += count;
        place_ = place_ + count == past_in_.size() ? 0 : place_ + count;
    }
}

}  // namespace halflsb
