#include "oracle/filters/biquad.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/exact_sums.hpp"

namespace halflsb {

namespace {

// A silent input lets the states decay into subnormal numbers, where a processor is a hundred times
// slower and where rounding can hold them for ever. They are dropped at fixed indices, so that block
// bounds do not matter; 1e-200 is beyond notice in any format.
constexpr std::size_t check_every_samples = 256;
constexpr double vanished = 1e-200;

}  // namespace

BiquadFilter::Section::Section(const BiquadSection& s)
    : direct(s.b0), feed_change(difference_of_product(s.b2, s.b0, s.a2)), mirrored(s.a1 > 0.0) {
    const double g = mirrored ? -1.0 : 1.0;
    const double numerator = sum_of_three(s.b0, g * s.b1, s.b2);
    const double denominator = sum_of_three(1.0, g * s.a1, s.a2);
    feed_value = g * difference_of_product(numerator, s.b0, denominator);  // = c1 + g c2, without its cancellation
    value_gain = g * denominator;
    change_gain = g * s.a2;
}

void BiquadFilter::Section::reset() { x1 = x2 = v = d = 0.0; }

void BiquadFilter::Section::drop_vanished() {
    if (std::fabs(v) < vanished && std::fabs(d) < vanished) v = d = 0.0;
}

template <bool is_mirrored>
void BiquadFilter::Section::run_form(std::span<const double> in, double* out) {
    double past1 = x1, past2 = x2, value = v, change = d;
    for (std::size_t i = 0; i < in.size(); ++i) {
        const double fed = feed_value * past1 + feed_change * (is_mirrored ? past2 + past1 : past2 - past1);
        change = (change_gain * change - value_gain * value) + fed;
        value = is_mirrored ? change - value : change + value;
        past2 = past1;
        past1 = in[i];
        out[i] = direct * past1 + value;
    }
    x1 = past1;
    x2 = past2;
    v = value;
    d = change;
}

void BiquadFilter::Section::run(std::span<const double> in, double* out) {
    if (mirrored) {
        run_form<true>(in, out);
    } else {
        run_form<false>(in, out);
    }
}

BiquadFilter::BiquadFilter(const BiquadCascade& design) : until_check_(check_every_samples) {
    for (const BiquadSection& section : design.sections) sections_.emplace_back(section);
}

void BiquadFilter::reset() {
    for (Section& section : sections_) section.reset();
    until_check_ = check_every_samples;
}

void BiquadFilter::process(std::span<const double> in, std::span<double> out) {
    std::size_t done = 0;
    while (done < in.size()) {
        const std::size_t count = std::min(in.size() - done, until_check_);
        const std::span<double> to = out.subspan(done, count);
        std::span<const double> from = in.subspan(done, count);
        for (Section& section : sections_) {
            section.run(from, to.data());
            from = to;
        }
        done += count;
        until_check_ -= count;
        if (until_check_ == 0) {
            for (Section& section : sections_) section.drop_vanished();
            until_check_ = check_every_samples;
        }
    }
}

}  // namespace halflsb
