#include "oracle/filters/fir_rates.hpp"

#include <algorithm>

#include "oracle/filters/cic.hpp"

namespace halflsb {

namespace {

constexpr std::size_t piece_samples = 1024;

// Four outputs, `step` inputs apart, each summed by itself from its newest sample on: while one addition waits for
// the one before, the processor works on the others.
void four_outputs(const std::vector<double>& taps, const double* newest, std::size_t step, double* out) {
    double s0 = 0.0, s1 = 0.0, s2 = 0.0, s3 = 0.0;
    for (const double tap : taps) {
        s0 += tap * newest[0];
        s1 += tap * newest[step];
        s2 += tap * newest[2 * step];
        s3 += tap * newest[3 * step];
        --newest;
    }
    out[0] = s0;
    out[1] = s1;
    out[2] = s2;
    out[3] = s3;
}

}  // namespace

FirDecimatorFilter::FirDecimatorFilter(const FirDecimator& design)
    : taps_(design.taps),
      factor_(static_cast<std::size_t>(design.factor)),
      phase_(static_cast<std::size_t>(design.phase_samples)),
      line_(taps_.size()),
      until_output_(phase_) {}

void FirDecimatorFilter::reset() { preload(0.0); }

void FirDecimatorFilter::preload(double value) {
    line_.fill(value);
    until_output_ = phase_;
}

std::size_t FirDecimatorFilter::outputs_for(std::size_t inputs) const {
    return decimated_count(inputs, until_output_, factor_);
}

void FirDecimatorFilter::process(std::span<const double> in, std::span<double> out) {
    std::size_t made = 0;
    while (!in.empty()) {
        const std::span<const double> fresh = line_.take(in);
        const std::size_t count = fresh.size();
        std::size_t at = until_output_;
        for (; at + 3 * factor_ < count; at += 4 * factor_, made += 4)
            four_outputs(taps_, fresh.data() + at, factor_, out.data() + made);
        for (; at < count; at += factor_) out[made++] = newest_first_sum(taps_, fresh.data() + at);
        until_output_ = at - count;
        in = in.subspan(count);
    }
}

FirInterpolatorFilter::FirInterpolatorFilter(const FirInterpolator& design) {
    const auto factor = static_cast<std::size_t>(design.factor);
    for (std::size_t phase = 0; phase < factor; ++phase) {
        Fir own;
        for (std::size_t k = phase; k < design.taps.size(); k += factor) own.taps.push_back(design.taps[k]);
        if (own.taps.empty()) own.taps.push_back(0.0);
        phases_.emplace_back(own);
    }
}

void FirInterpolatorFilter::reset() {
    for (FirFilter& phase : phases_) phase.reset();
}

void FirInterpolatorFilter::preload(double value) {
    for (FirFilter& phase : phases_) phase.preload(value);
}

void FirInterpolatorFilter::process(std::span<const double> in, std::span<double> out) {
    const std::size_t factor = phases_.size();
    for (std::size_t done = 0; done < in.size(); done += piece_samples) {
        const std::size_t count = std::min(piece_samples, in.size() - done);
        scratch_.resize(count);
        for (std::size_t phase = 0; phase < factor; ++phase) {
            phases_[phase].process(in.subspan(done, count), scratch_);
            double* const to = out.data() + done * factor + phase;
            for (std::size_t i = 0; i < count; ++i) to[i * factor] = scratch_[i];
        }
    }
}

}  // namespace halflsb
