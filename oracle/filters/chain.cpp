#include "oracle/filters/chain.hpp"

#include <algorithm>

#include "oracle/filters/biquad.hpp"
#include "oracle/filters/comb.hpp"
#include "oracle/filters/fir.hpp"
#include "oracle/filters/moving_average.hpp"

namespace halflsb {

namespace {

// Pieces that stay in the first-level cache while they pass the stages.
constexpr std::size_t piece_samples = 1024;

std::unique_ptr<Filter> make_stage_filter(const MovingAverage& design) {
    return std::make_unique<MovingAverageFilter>(design);
}
std::unique_ptr<Filter> make_stage_filter(const Fir& design) { return std::make_unique<FirFilter>(design); }
std::unique_ptr<Filter> make_stage_filter(const BiquadCascade& design) {
    return std::make_unique<BiquadFilter>(design);
}
std::unique_ptr<Filter> make_stage_filter(const Comb& design) { return std::make_unique<CombFilter>(design); }

}  // namespace

ChainFilter::ChainFilter(std::vector<std::unique_ptr<Filter>> stages) : stages_(std::move(stages)) {}

void ChainFilter::reset() {
    for (const auto& stage : stages_) stage->reset();
}

void ChainFilter::process(std::span<const double> in, std::span<double> out) {
    if (stages_.empty()) {
        if (in.data() != out.data()) std::copy(in.begin(), in.end(), out.begin());
        return;
    }
    for (std::size_t done = 0; done < in.size(); done += piece_samples) {
        const std::size_t count = std::min(piece_samples, in.size() - done);
        const std::span<double> to = out.subspan(done, count);
        std::span<const double> from = in.subspan(done, count);
        for (const auto& stage : stages_) {
            stage->process(from, to);
            from = to;
        }
    }
}

FilterChain chain_of_channel(const FilterChain& chain, int channel) {
    FilterChain own;
    for (const FilterStage& stage : chain) {
        const auto& list = stage.channels;
        if (list.empty() || std::find(list.begin(), list.end(), channel) != list.end()) own.push_back(stage);
    }
    return own;
}

std::unique_ptr<Filter> make_filter(const FilterChain& chain) {
    std::vector<std::unique_ptr<Filter>> stages;
    for (const FilterStage& stage : chain) {
        stages.push_back(std::visit([](const auto& design) { return make_stage_filter(design); }, stage.design));
    }
    return std::make_unique<ChainFilter>(std::move(stages));
}

}  // namespace halflsb
