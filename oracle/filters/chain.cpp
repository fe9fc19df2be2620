#include "oracle/filters/chain.hpp"

#include <algorithm>
#include <type_traits>

#include "oracle/filters/biquad.hpp"
#include "oracle/filters/cic.hpp"
#include "oracle/filters/comb.hpp"
#include "oracle/filters/fir.hpp"
#include "oracle/filters/fir_rates.hpp"
#include "oracle/filters/median.hpp"
#include "oracle/filters/moving_average.hpp"
#include "oracle/filters/partitioned_fir.hpp"
#include "oracle/filters/rates.hpp"
#include "oracle/filters/recursion.hpp"
#include "oracle/filters/stage_filter.hpp"

namespace halflsb {

namespace {

// Pieces that stay in the first-level cache while they pass the stages.
constexpr std::size_t piece_samples = 1024;

template <class Design>
struct FilterOf;
template <>
struct FilterOf<MovingAverage> : std::type_identity<MovingAverageFilter> {};
template <>
struct FilterOf<Fir> : std::type_identity<FirFilter> {};
template <>
struct FilterOf<BiquadCascade> : std::type_identity<BiquadFilter> {};
template <>
struct FilterOf<Comb> : std::type_identity<CombFilter> {};
template <>
struct FilterOf<Recursion> : std::type_identity<RecursionFilter> {};
template <>
struct FilterOf<Median> : std::type_identity<MedianFilter> {};
template <>
struct FilterOf<CicDecimator> : std::type_identity<CicDecimatorFilter> {};
template <>
struct FilterOf<CicInterpolator> : std::type_identity<CicInterpolatorFilter> {};
template <>
struct FilterOf<FirDecimator> : std::type_identity<FirDecimatorFilter> {};
template <>
struct FilterOf<FirInterpolator> : std::type_identity<FirInterpolatorFilter> {};

template <class Made, class Design>
std::unique_ptr<Filter> begun(const Design& design, Initial initial) {
    auto filter = std::make_unique<Made>(design);
    if constexpr (std::is_base_of_v<StageFilter, Made>) {
        if (initial == Initial::first_sample) return std::make_unique<FirstSampleStart>(std::move(filter));
    }
    return filter;
}

template <class Design>
std::unique_ptr<Filter> stage_filter(const Design& design, Initial initial) {
    if constexpr (std::is_same_v<Design, MovingAverage>) {
        if (initial == Initial::growing) return std::make_unique<MovingAverageFilter>(design, true);
    }
    if constexpr (std::is_same_v<Design, Fir>) {
        if (design.taps.size() >= least_partitioned_taps) return begun<PartitionedFirFilter>(design, initial);
    }
    return begun<typename FilterOf<Design>::type>(design, initial);
}

// So few inputs at a time that no stage gets much more than piece_samples.
std::size_t piece_inputs_of(const FilterChain& chain) {
    double rate = 1.0, highest = 1.0;
    for (const FilterStage& stage : chain) highest = std::max(highest, rate = output_rate_hz(stage, rate));
    return std::max<std::size_t>(1, static_cast<std::size_t>(static_cast<double>(piece_samples) / highest));
}

}  // namespace

ChainFilter::ChainFilter(std::vector<std::unique_ptr<Filter>> stages, bool changes_rate, std::size_t piece_inputs)
    : stages_(std::move(stages)), changes_rate_(changes_rate), piece_inputs_(piece_inputs) {}

void ChainFilter::reset() {
    for (const auto& stage : stages_) stage->reset();
}

std::size_t ChainFilter::outputs_for(std::size_t inputs) const {
    if (!changes_rate_) return inputs;
    for (const auto& stage : stages_) inputs = stage->outputs_for(inputs);
    return inputs;
}

// Where the rate stays every stage works in place, in `out`.
std::size_t ChainFilter::process_piece(std::span<const double> from, std::span<double> out) {
    for (std::size_t i = 0; i < stages_.size(); ++i) {
        const std::size_t count = stages_[i]->outputs_for(from.size());
        std::span<double> to = out.first(changes_rate_ && i + 1 < stages_.size() ? 0 : count);
        if (to.size() != count) {
            between_[i % 2].resize(count);
            to = between_[i % 2];
        }
        stages_[i]->process(from, to);
        from = to;
    }
    return from.size();
}

void ChainFilter::process(std::span<const double> in, std::span<double> out) {
    if (stages_.empty()) {
        if (in.data() != out.data()) std::copy(in.begin(), in.end(), out.begin());
        return;
    }
    std::size_t made = 0;
    for (std::size_t done = 0; done < in.size(); done += piece_inputs_)
        made += process_piece(in.subspan(done, std::min(piece_inputs_, in.size() - done)), out.subspan(made));
}

FilterChain from_rest(FilterChain chain) {
    for (FilterStage& stage : chain) stage.initial = Initial::zeros;
    return chain;
}

std::unique_ptr<Filter> make_filter(const FilterChain& chain) {
    std::vector<std::unique_ptr<Filter>> stages;
    for (const FilterStage& stage : chain) {
        stages.push_back(
            std::visit([&](const auto& design) { return stage_filter(design, stage.initial); }, stage.design));
    }
    return std::make_unique<ChainFilter>(std::move(stages), changes_rate(chain), piece_inputs_of(chain));
}

bool is_linear(const FilterChain& chain) {
    return std::none_of(chain.begin(), chain.end(),
                        [](const FilterStage& stage) { return std::holds_alternative<Median>(stage.design); });
}

}  // namespace halflsb
