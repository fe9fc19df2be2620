#include "oracle/filters/fir.hpp"

#include <algorithm>
#include <cstring>

namespace halflsb {

namespace {

// Two doubles in one register of any 64-bit processor; lanes never meet, so each output sees the
// same operations as in a scalar loop.
using Pair = double __attribute__((vector_size(16)));

constexpr std::size_t tile_outputs = 16;
constexpr std::size_t least_room_samples = 2048;

// `newest` points at the sample of the first output; taps run back from there.
void fill_tile(const std::vector<double>& taps, const double* newest, double* out) {
    constexpr std::size_t pairs = tile_outputs / 2;
    Pair s0{}, s1{}, s2{}, s3{}, s4{}, s5{}, s6{}, s7{};
    for (const double tap : taps) {
        const Pair h = {tap, tap};
        Pair x[pairs];
        std::memcpy(x, newest, sizeof x);
        s0 += h * x[0];
        s1 += h * x[1];
        s2 += h * x[2];
        s3 += h * x[3];
        s4 += h * x[4];
        s5 += h * x[5];
        s6 += h * x[6];
        s7 += h * x[7];
        --newest;
    }
    const Pair sums[pairs] = {s0, s1, s2, s3, s4, s5, s6, s7};
    std::memcpy(out, sums, sizeof sums);
}

double single_output(const std::vector<double>& taps, const double* newest) {
    double sum = 0.0;
    for (const double tap : taps) sum += tap * *newest--;
    return sum;
}

}  // namespace

FirFilter::FirFilter(const Fir& design)
    : taps_(design.taps), line_(taps_.size() - 1 + std::max(taps_.size(), least_room_samples), 0.0) {
    reset();
}

void FirFilter::reset() { preload(0.0); }

void FirFilter::preload(double value) {
    end_ = taps_.size() - 1;
    std::fill(line_.begin(), line_.begin() + static_cast<std::ptrdiff_t>(end_), value);
}

void FirFilter::process(std::span<const double> in, std::span<double> out) {
    const std::size_t past = taps_.size() - 1;
    std::size_t done = 0;
    while (done < in.size()) {
        if (end_ == line_.size()) {
            std::copy(line_.end() - static_cast<std::ptrdiff_t>(past), line_.end(), line_.begin());
            end_ = past;
        }
        const std::size_t count = std::min(in.size() - done, line_.size() - end_);
        double* const fresh = line_.data() + end_;
        std::copy_n(in.data() + done, count, fresh);
        std::size_t i = 0;
        for (; i + tile_outputs <= count; i += tile_outputs) fill_tile(taps_, fresh + i, out.data() + done + i);
        for (; i < count; ++i) out[done + i] = single_output(taps_, fresh + i);
        end_ += count;
        done += count;
    }
}

}  // namespace halflsb
