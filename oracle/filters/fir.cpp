#include "oracle/filters/fir.hpp"

#include <cstring>

namespace halflsb {

namespace {

// Two doubles in one register of any 64-bit processor; lanes never meet, so each output sees the
// same operations as in a scalar loop.
using Pair = double __attribute__((vector_size(16)));

constexpr std::size_t tile_outputs = 16;

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

}  // namespace

FirFilter::FirFilter(const Fir& design) : taps_(design.taps), line_(taps_.size()) {}

void FirFilter::reset() { preload(0.0); }

void FirFilter::preload(double value) { line_.fill(value); }

void FirFilter::process(std::span<const double> in, std::span<double> out) {
    for (std::size_t done = 0; done < in.size();) {
        const std::span<const double> fresh = line_.take(in.subspan(done));
        std::size_t i = 0;
        for (; i + tile_outputs <= fresh.size(); i += tile_outputs)
            fill_tile(taps_, fresh.data() + i, out.data() + done + i);
        for (; i < fresh.size(); ++i) out[done + i] = newest_first_sum(taps_, fresh.data() + i);
        done += fresh.size();
    }
}

}  // namespace halflsb
