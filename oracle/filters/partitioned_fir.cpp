#include "oracle/filters/partitioned_fir.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <cstring>

namespace halflsb {

namespace {

using Pair = double __attribute__((vector_size(16)));
constexpr std::size_t lanes = 2;

// A part in direct form costs B, the others N / B: about the root of N serves both. Up to 1024, so that the
// transforms have the same bits on every machine.
std::size_t part_of(std::size_t taps) {
    const auto root = static_cast<std::size_t>(std::sqrt(2.0 * static_cast<double>(taps)));
    return std::clamp<std::size_t>(std::bit_ceil(root), 64, 1024);
}

// A whole number of pairs.
std::size_t bins_of(std::size_t part) { return part + lanes; }

Pair pair_at(const std::vector<double>& values, std::size_t index) {
    Pair pair;
    std::memcpy(&pair, values.data() + index, sizeof pair);
    return pair;
}

void put_pair(std::vector<double>& values, std::size_t index, const Pair& pair) {
    std::memcpy(values.data() + index, &pair, sizeof pair);
}

Fir first_taps(const Fir& design, std::size_t count) {
    const auto end = design.taps.begin() + static_cast<std::ptrdiff_t>(std::min(count, design.taps.size()));
    return {{design.taps.begin(), end}};
}

}  // namespace

PartitionedFirFilter::PartitionedFirFilter(const Fir& design)
    : part_(part_of(design.taps.size())),
      head_(first_taps(design, part_)),
      forward_(2 * part_, false),
      inverse_(2 * part_, true),
      time_(2 * part_),
      bins_(2 * part_),
      sum_(bins_of(part_)),
      window_(2 * part_, 0.0),
      tail_(part_, 0.0) {
    // What the inverse transform multiplies by is divided out here, a power of two.
    const double scale = 1.0 / static_cast<double>(2 * part_);
    std::vector<double> padded(2 * part_);
    for (std::size_t first = part_; first < design.taps.size(); first += part_) {
        const std::size_t count = std::min(part_, design.taps.size() - first);
        std::fill(padded.begin(), padded.end(), 0.0);
        for (std::size_t k = 0; k < count; ++k) padded[k] = scale * design.taps[first + k];
        transform(padded, parts_.emplace_back(bins_of(part_)));
    }
    inputs_.assign(parts_.size(), Spectrum(bins_of(part_)));
}

void PartitionedFirFilter::transform(std::span<const double> values, Spectrum& into) {
    std::copy(values.begin(), values.end(), time_.begin());
    forward_.transform(time_.data(), bins_.data());
    for (std::size_t bin = 0; bin <= part_; ++bin) {
        into.real[bin] = bins_[bin].real();
        into.imaginary[bin] = bins_[bin].imag();
    }
}

void PartitionedFirFilter::reset() {
    head_.reset();
    for (Spectrum& input : inputs_) {
        std::fill(input.real.begin(), input.real.end(), 0.0);
        std::fill(input.imaginary.begin(), input.imaginary.end(), 0.0);
    }
    std::fill(window_.begin(), window_.end(), 0.0);
    std::fill(tail_.begin(), tail_.end(), 0.0);
    filled_ = 0;
    newest_ = 0;
}

void PartitionedFirFilter::preload(double value) {
    reset();
    head_.preload(value);
    for (Spectrum& input : inputs_) input.real[0] = value * static_cast<double>(2 * part_);
    std::fill(window_.begin(), window_.end(), value);
    predict();
}

// Part j, from tap (j + 1) B on, meets the stretch that is j older than the newest.
void PartitionedFirFilter::predict() {
    const std::size_t bins = bins_of(part_);
    for (std::size_t bin = 0; bin < bins; bin += lanes) {
        Pair real{}, imaginary{};
        std::size_t input = newest_;
        for (const Spectrum& part : parts_) {
            const Pair xr = pair_at(inputs_[input].real, bin), xi = pair_at(inputs_[input].imaginary, bin);
            const Pair hr = pair_at(part.real, bin), hi = pair_at(part.imaginary, bin);
            real += xr * hr - xi * hi;
            imaginary += xr * hi + xi * hr;
            input = input == 0 ? inputs_.size() - 1 : input - 1;
        }
        put_pair(sum_.real, bin, real);
        put_pair(sum_.imaginary, bin, imaginary);
    }
    for (std::size_t bin = 0; bin <= part_; ++bin) bins_[bin] = {sum_.real[bin], sum_.imaginary[bin]};
    for (std::size_t bin = part_ + 1; bin < 2 * part_; ++bin) bins_[bin] = std::conj(bins_[2 * part_ - bin]);
    inverse_.transform(bins_.data(), time_.data());
    // The first half is where the circle has closed.
    for (std::size_t n = 0; n < part_; ++n) tail_[n] = time_[part_ + n].real();
}

void PartitionedFirFilter::finish_stretch() {
    newest_ = newest_ + 1 == inputs_.size() ? 0 : newest_ + 1;
    transform(window_, inputs_[newest_]);
    predict();
    std::copy_n(window_.begin() + static_cast<std::ptrdiff_t>(part_), part_, window_.begin());
    filled_ = 0;
}

void PartitionedFirFilter::process(std::span<const double> in, std::span<double> out) {
    for (std::size_t done = 0; done < in.size();) {
        const std::size_t count = std::min(in.size() - done, part_ - filled_);
        std::copy_n(in.data() + done, count, window_.data() + part_ + filled_);
        head_.process(in.subspan(done, count), out.subspan(done, count));
        for (std::size_t i = 0; i < count; ++i) out[done + i] += tail_[filled_ + i];
        filled_ += count;
        done += count;
        if (filled_ == part_) finish_stretch();
    }
}

}  // namespace halflsb
