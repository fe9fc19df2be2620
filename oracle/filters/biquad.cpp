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
    : g(s.a1 > 0.0 ? -1.0 : 1.0), direct(s.b0), feed_change(difference_of_product(s.b2, s.b0, s.a2)) {
    const double numerator = sum_of_three(s.b0, g * s.b1, s.b2);
    const double denominator = sum_of_three(1.0, g * s.a1, s.a2);
    feed_value = g * difference_of_product(numerator, s.b0, denominator);  // = c1 + g c2, without its cancellation
    value_gain = g * denominator;
    change_gain = g * s.a2;
    gain_at_dc = sum_of_three(s.b0, s.b1, s.b2) / sum_of_three(1.0, s.a1, s.a2);
}

// At rest under a constant v = d + g v, and x1 = x2 = x.
double BiquadFilter::Section::preload(double x) {
    const double y = gain_at_dc * x;
    x1 = x2 = x;
    v = y - direct * x;
    d = v - g * v;
    return y;
}

inline double BiquadFilter::Section::step(double x) {
    const double fed = feed_value * x1 + feed_change * (x2 - g * x1);
    d = (change_gain * d - value_gain * v) + fed;
    v = d + g * v;
    x2 = x1;
    x1 = x;
    return direct * x + v;
}

void BiquadFilter::Section::drop_vanished() {
    if (std::fabs(v) < vanished && std::fabs(d) < vanished) v = d = 0.0;
}

// Sample by sample through a few sections held in registers: while one waits for its own feedback the
// processor works on the others.
template <std::size_t... index>
void BiquadFilter::run_group(Section* sections, std::span<const double> in, double* out,
                             std::index_sequence<index...>) {
    Section held[] = {sections[index]...};
    for (std::size_t i = 0; i < in.size(); ++i) {
        double sample = in[i];
        ((sample = held[index].step(sample)), ...);
        out[i] = sample;
    }
    ((sections[index] = held[index]), ...);
}

BiquadFilter::BiquadFilter(const BiquadCascade& design) : until_check_(check_every_samples) {
    for (const BiquadSection& section : design.sections) sections_.emplace_back(section);
}

void BiquadFilter::reset() {
    for (Section& section : sections_) section.reset();
    until_check_ = check_every_samples;
}

void BiquadFilter::preload(double value) {
    reset();
    for (Section& section : sections_) value = section.preload(value);
}

void BiquadFilter::process(std::span<const double> in, std::span<double> out) {
    std::size_t done = 0;
    while (done < in.size()) {
        const std::size_t count = std::min(in.size() - done, until_check_);
        const std::span<double> to = out.subspan(done, count);
        std::span<const double> from = in.subspan(done, count);
        for (std::size_t first = 0; first < sections_.size();) {
            Section* const group = &sections_[first];
            switch (sections_.size() - first) {
                case 1:
                    run_group(group, from, to.data(), std::make_index_sequence<1>());
                    break;
                case 2:
                    run_group(group, from, to.data(), std::make_index_sequence<2>());
                    break;
                case 3:
                    run_group(group, from, to.data(), std::make_index_sequence<3>());
                    break;
                default:
                    run_group(group, from, to.data(), std::make_index_sequence<4>());
                    break;
            }
            first += 4;
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
