#include "oracle/filters/impulse_run.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

// Stages commute, and a long FIR costs nothing where its input is a unit impulse.
std::ptrdiff_t longest_fir(const FilterChain& chain) {
    std::ptrdiff_t longest = -1;
    std::size_t taps = 1;
    for (std::size_t i = 0; i < chain.size(); ++i) {
        const auto* fir = std::get_if<Fir>(&chain[i].design);
        if (fir == nullptr || fir->taps.size() <= taps) continue;
        taps = fir->taps.size();
        longest = static_cast<std::ptrdiff_t>(i);
    }
    return longest;
}

}  // namespace

double sum_of_sizes(std::span<const double> piece) {
    double sum = 0.0;
    for (const double h : piece) sum += std::fabs(h);
    return sum;
}

ImpulseRun::ImpulseRun(const FilterChain& chain, std::size_t phase) : source_(phase + 1, 0.0) {
    source_.back() = 1.0;
    const auto add = [this](const FilterDesign& design, const Memory& memory) {
        parts_.push_back({make_filter({FilterStage{design, std::nullopt}}), memory, PastSum(memory.samples),
                          PastSum(memory.samples)});
    };
    const std::ptrdiff_t first = changes_rate(chain) ? -1 : longest_fir(chain);
    for (std::size_t i = 0; i < chain.size(); ++i) {
        const FilterDesign& design = chain[i].design;
        if (static_cast<std::ptrdiff_t>(i) == first) {
            source_ = std::get<Fir>(design).taps;
        } else if (const auto* cascade = std::get_if<BiquadCascade>(&design)) {
            for (const BiquadSection& section : cascade->sections) add(BiquadCascade{{section}}, memory_of(section));
        } else {
            std::visit(
                [&](const auto& kind) {
                    if constexpr (requires { memory_of(kind); }) add(design, memory_of(kind));
                },
                design);
        }
    }
    source_rest_ = sum_of_sizes(source_);
}

std::span<const double> ImpulseRun::next() {
    pieces_[0].assign(piece_samples, 0.0);
    const std::size_t count = std::min(piece_samples, source_.size() - source_at_);
    const auto from = source_.begin() + static_cast<std::ptrdiff_t>(source_at_);
    std::copy_n(from, count, pieces_[0].begin());
    source_at_ += count;
    source_rest_ = count < piece_samples ? 0.0 : sum_of_sizes(std::span(source_).subspan(source_at_));
    for (Part& part : parts_) {
        part.past_in.add(pieces_[0]);
        pieces_[1].resize(part.filter->outputs_for(pieces_[0].size()));
        part.filter->process(pieces_[0], pieces_[1]);
        part.past_out.add(pieces_[1]);
        std::swap(pieces_[0], pieces_[1]);
    }
    return pieces_[0];
}

double ImpulseRun::rest() const {
    double coming = source_rest_;
    for (const Part& part : parts_) {
        coming = share(part.memory.gain, coming) + share(part.memory.of_past_in, part.past_in.value()) +
                 share(part.memory.of_past_out, part.past_out.value());
    }
    return coming;
}

}  // namespace halflsb
