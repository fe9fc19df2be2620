#include "oracle/filters/cic.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

namespace {

// Pieces that stay in the first-level cache while they pass the sums.
constexpr std::size_t piece_samples = 1024;

template <class Cic>
std::vector<MovingSum> sums_of(const Cic& design) {
    return std::vector<MovingSum>(static_cast<std::size_t>(design.order),
                                  MovingSum(static_cast<std::size_t>(window_of(design))));
}

}  // namespace

double divisor_of(const CicDecimator& design) {
    return design.shift_bits ? std::ldexp(1.0, *design.shift_bits) : gain_of_sums(design);
}

double divisor_of(const CicInterpolator& design) {
    if (design.shift_bits) return std::ldexp(1.0, *design.shift_bits);
    return gain_of_sums(design) / design.factor;
}

CicDecimatorFilter::CicDecimatorFilter(const CicDecimator& design)
    : factor_(static_cast<std::size_t>(design.factor)),
      phase_(static_cast<std::size_t>(design.phase_samples)),
      divisor_(divisor_of(design)),
      sums_(sums_of(design)),
      until_output_(phase_) {}

void CicDecimatorFilter::reset() {
    for (MovingSum& sum : sums_) sum.reset();
    until_output_ = phase_;
}

std::size_t CicDecimatorFilter::outputs_for(std::size_t inputs) const {
    return decimated_count(inputs, until_output_, factor_);
}

void CicDecimatorFilter::process(std::span<const double> in, std::span<double> out) {
    std::size_t made = 0;
    for (std::size_t done = 0; done < in.size(); done += piece_samples) {
        const std::size_t count = std::min(piece_samples, in.size() - done);
        scratch_.resize(count);
        std::span<const double> from = in.subspan(done, count);
        for (MovingSum& sum : sums_) {
            sum.process(from, scratch_);
            from = scratch_;
        }
        std::size_t at = until_output_;
        for (; at < count; at += factor_) out[made++] = scratch_[at] / divisor_;
        until_output_ = at - count;
    }
}

CicInterpolatorFilter::CicInterpolatorFilter(const CicInterpolator& design)
    : factor_(static_cast<std::size_t>(design.factor)), divisor_(divisor_of(design)), sums_(sums_of(design)) {}

void CicInterpolatorFilter::reset() {
    for (MovingSum& sum : sums_) sum.reset();
}

void CicInterpolatorFilter::process(std::span<const double> in, std::span<double> out) {
    const std::size_t inputs_a_piece = std::max<std::size_t>(1, piece_samples / factor_);
    for (std::size_t done = 0; done < in.size(); done += inputs_a_piece) {
        const std::size_t count = std::min(inputs_a_piece, in.size() - done);
        const std::span<double> piece = out.subspan(done * factor_, count * factor_);
        std::fill(piece.begin(), piece.end(), 0.0);
        for (std::size_t i = 0; i < count; ++i) piece[i * factor_] = in[done + i];
        for (MovingSum& sum : sums_) sum.process(piece, piece);
        for (double& value : piece) value /= divisor_;
    }
}

}  // namespace halflsb
