#include "oracle/filters/memory.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/cic.hpp"
#include "oracle/filters/exact_sums.hpp"
#include "oracle/filters/recursion.hpp"

namespace halflsb {

namespace {

double sum_of(std::span<const double> values) {
    double sum = 0.0;
    for (const double value : values) sum += std::fabs(value);
    return sum;
}

// At least the sum over n of |g[n]|, g the impulse response of 1 / (1 + a1 z^-1 + a2 z^-2). Each 1 - radius is taken
// from A(1) or A(-1), where nothing cancels.
double recursion_norm(double a1, double a2) {
    const double size = std::fabs(a1);
    const double imaginary = difference_of_product(4.0 * a2, a1, a1);  // the square of 2 r sin theta
    if (imaginary > 0.0) {
        const double radius = std::sqrt(a2), sine = std::sqrt(imaginary) / (2.0 * radius);
        const double gap = (1.0 - a2) / (1.0 + radius);
        return std::min(1.0 / (gap * gap), 1.0 / (gap * sine));
    }
    const double near = 0.5 * (size + std::sqrt(-imaginary));  // the pole of larger radius
    const double far = near > 0.0 ? a2 / near : 0.0;           // negative where it lies on the other side
    const double near_gap = sum_of_three(1.0, -size, a2) / (1.0 - far);
    const double far_gap = far >= 0.0 ? 1.0 - far : sum_of_three(1.0, size, a2) / (1.0 + near);
    return 1.0 / (near_gap * far_gap);
}

}  // namespace

Memory memory_of(const MovingAverage& design) { return {1.0, 1.0, 0.0, static_cast<std::size_t>(design.points - 1)}; }

Memory memory_of(const Fir& design) {
    const double norm = sum_of(design.taps);
    return {norm, norm, 0.0, design.taps.empty() ? 0 : design.taps.size() - 1};
}

Memory memory_of(const BiquadSection& s) {
    if (s.a1 == 0.0 && s.a2 == 0.0) {
        return {std::fabs(s.b0) + std::fabs(s.b1) + std::fabs(s.b2), std::fabs(s.b1) + std::fabs(s.b2), 0.0, 2};
    }
    const double norm = recursion_norm(s.a1, s.a2);
    return {norm * (std::fabs(s.b0) + std::fabs(s.b1) + std::fabs(s.b2)), norm * (std::fabs(s.b1) + std::fabs(s.b2)),
            norm * (std::fabs(s.a1) + std::fabs(s.a2)), 2};
}

Memory memory_of(const Comb& design) {
    const double feedback = std::fabs(design.feedback), series = 1.0 / (1.0 - feedback);
    return {series * (std::fabs(design.direct) + std::fabs(design.forward)), series * std::fabs(design.forward),
            series * feedback, static_cast<std::size_t>(design.delay_samples)};
}

// u[i] = -sum over k >= i of a[k] g[n - (k - i)] is what an output of 1 that is i samples old still returns. Once the
// last outputs of each such run, taken together, are at most half of that 1, no state can do more: all that comes later
// is a geometric series. g is run on until little is left of it.
Memory memory_of(const Recursion& design) {
    const std::size_t order = design.a.size() - 1;
    double inputs = 0.0, past_inputs = 0.0, outputs = 0.0;
    for (const double b : design.b) inputs += std::fabs(b);
    past_inputs = inputs - std::fabs(design.b.front());
    for (std::size_t k = 1; k <= order; ++k) outputs += std::fabs(design.a[k]);
    const std::size_t past = std::max(design.b.size(), design.a.size()) - 1;
    if (outputs == 0.0) return {inputs, past_inputs, 0.0, past};

    constexpr std::size_t most_samples = std::size_t{1} << 22, piece_samples = 1024;
    RecursionFilter loop(Recursion{{1.0}, design.a});
    std::vector<double> last(2 * order, 0.0), piece(piece_samples);  // the newest values of g, the newest last
    double sum = 0.0;
    for (std::size_t done = 0; done < most_samples; done += piece_samples) {
        std::fill(piece.begin(), piece.end(), 0.0);
        if (done == 0) piece[0] = 1.0;
        loop.process(piece, piece);
        sum += sum_of(piece);
        std::copy(piece.end() - static_cast<std::ptrdiff_t>(last.size()), piece.end(), last.begin());
        double left = 0.0;  // of a state of sum 1
        for (std::size_t i = 1; i <= order; ++i) {
            double of_this = 0.0;
            for (std::size_t age = 0; age < order; ++age) {
                double u = 0.0;
                for (std::size_t k = i; k <= order; ++k) u -= design.a[k] * last[last.size() - 1 - age - (k - i)];
                of_this += std::fabs(u);
            }
            left = std::max(left, of_this);
        }
        if (!(left <= 0.5)) continue;
        const double of_state = outputs * sum / (1.0 - left);
        const double coming = of_state * sum_of(std::span(last).last(order));
        if (coming > 0x1p-20 * sum && done + piece_samples < most_samples) continue;
        const double norm = sum + coming;
        return {norm * inputs, norm * past_inputs, of_state, past};
    }
    return {no_limit, no_limit, no_limit, past};
}

namespace {

// Of N sums of R M samples, over the higher rate.
template <class Cic>
double reach_of(const Cic& design) {
    return static_cast<double>(design.order) * (window_of(design) - 1);
}
template <class Cic>
double gain_of(const Cic& design) {
    return gain_of_sums(design) / divisor_of(design);
}

}  // namespace

Memory memory_of(const CicDecimator& design) {
    return {gain_of(design), gain_of(design), 0.0, static_cast<std::size_t>(reach_of(design))};
}

Memory memory_of(const CicInterpolator& design) {
    return {gain_of(design), gain_of(design), 0.0, static_cast<std::size_t>(reach_of(design) / design.factor)};
}

Memory memory_of(const FirDecimator& design) { return memory_of(Fir{design.taps}); }

Memory memory_of(const FirInterpolator& design) {
    Memory memory = memory_of(Fir{design.taps});
    memory.samples /= static_cast<std::size_t>(design.factor);
    return memory;
}

double share(double gain, double amount) { return gain == 0.0 || amount == 0.0 ? 0.0 : gain * amount; }

void PastSum::add(std::span<const double> piece) {
    const std::span<const double> recent = piece.last(std::min(samples_, piece.size()));
    if (recent.size() == samples_) {
        parts_.clear();
        count_ = 0;
    }
    // Small pieces are put together: what is summed below stays short.
    if (!parts_.empty() && parts_.back().count < samples_ / 16) {
        parts_.back().count += recent.size();
        parts_.back().sum += sum_of(recent);
    } else {
        parts_.push_back({recent.size(), sum_of(recent)});
    }
    count_ += recent.size();
    for (; parts_.size() > 1 && count_ - parts_.front().count >= samples_; parts_.pop_front())
        count_ -= parts_.front().count;
    value_ = 0.0;
    for (const Part& part : parts_) value_ += part.sum;
}

}  // namespace halflsb
