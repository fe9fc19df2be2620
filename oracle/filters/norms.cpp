// What a filter does to one sample, how large its output can get, and how long it remembers.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>

#include "oracle/filters/filter.hpp"
#include "oracle/filters/flush.hpp"
#include "oracle/filters/impulse_sums.hpp"
#include "oracle/filters/multirate_norms.hpp"
#include "oracle/filters/rates.hpp"
#include "oracle/filters/spaced_chain.hpp"

namespace halflsb {

namespace {

constexpr auto piece_samples = static_cast<std::int64_t>(ImpulseRun::piece_samples);

// Rounding in a tail, and the part of the bound that is not computed, are below this of the limit.
constexpr double slack = 0x1p-20;

// The smallest m with sum over n >= m of |h[n]| below the limit: that m lies in the piece behind which the sum first
// is. The sums are taken from their small ends, so nothing cancels.
std::int64_t start_of_tail_in(const FilterChain& chain, std::size_t piece_index, double behind, double limit) {
    ImpulseRun run(chain);
    std::span<const double> piece = run.next();
    for (std::size_t i = 0; i < piece_index; ++i) piece = run.next();
    const std::int64_t first = static_cast<std::int64_t>(piece_index) * piece_samples;
    double tail = behind;
    for (std::size_t i = piece.size(); i-- > 0;) {
        tail += std::fabs(piece[i]);
        if (!(tail < limit)) return first + static_cast<std::int64_t>(i) + 1;
    }
    return first;
}

std::optional<std::int64_t> flush_of_steady_rate(const FilterChain& chain, double limit, std::int64_t most) {
    // Run until the rest does not matter. That takes more samples than the answer, hence twice the most.
    ImpulseRun run(chain);
    std::vector<double> sums;
    do {
        if (static_cast<std::int64_t>(sums.size()) * piece_samples >= 2 * most) return std::nullopt;
        sums.push_back(sum_of_sizes(run.next()));
    } while (!(run.rest() <= slack * limit));

    double behind = run.rest();
    std::size_t piece = sums.size() - 1;
    while (piece > 0 && behind + sums[piece] < limit) behind += sums[piece--];
    const std::int64_t start = start_of_tail_in(chain, piece, behind, limit);
    // The newest sample of the past is one older than the first zero.
    const std::int64_t zeros = start > 0 ? start - 1 : 0;
    return zeros <= most ? std::optional(zeros) : std::nullopt;
}

double l1_of_steady_rate(const FilterChain& chain, double tail) {
    const auto of_piece = [](std::span<const double> piece) { return std::array<double, 1>{sum_of_sizes(piece)}; };
    const auto is_done = [tail](const std::array<double, 1>& sum, double rest) { return rest <= tail * sum[0]; };
    return sums_over_impulse<1>(without_spacing(chain).chain, 1.0, of_piece, is_done)[0];
}

/// A chain with a median in it: what stands before the first one, and what behind.
struct SplitAtMedian {
    FilterChain before, behind;
    int points;
};

std::optional<SplitAtMedian> split_at_median(const FilterChain& chain) {
    for (auto at = chain.begin(); at != chain.end(); ++at) {
        if (const auto* median = std::get_if<Median>(&at->design))
            return SplitAtMedian{{chain.begin(), at}, {at + 1, chain.end()}, median->points};
    }
    return std::nullopt;
}

// A median moves by no more than the largest change of its inputs, and forgets after its points. So the past's share
// may be half the limit at its input, reaching the output through what stands behind, and half of it there.
std::optional<std::int64_t> flush_around_median(const SplitAtMedian& split, double full_scale, double half_step,
                                                std::int64_t most) {
    const auto before =
        flush_samples_within(split.before, full_scale, 0.5 * half_step / std::max(1.0, l1_norm(split.behind)), most);
    const auto behind =
        flush_samples_within(split.behind, full_scale * std::max(1.0, l1_norm(split.before)), 0.5 * half_step, most);
    if (!before || !behind) return std::nullopt;
    const RateRatio ratio = rate_ratio(split.before);
    const std::int64_t inner = split.points - 1 + *behind;  // at the rate of the median
    const std::int64_t zeros = *before + (inner * ratio.down + ratio.up - 1) / ratio.up;
    FilterChain whole = split.before;
    whole.insert(whole.end(), split.behind.begin(), split.behind.end());
    const std::int64_t cycle = rate_cycle(whole).inputs;
    const std::int64_t whole_cycles = (zeros + cycle - 1) / cycle * cycle;
    return whole_cycles <= most ? std::optional(whole_cycles) : std::nullopt;
}

}  // namespace

std::vector<double> impulse_response(const FilterChain& chain, std::size_t length) {
    const auto filter = make_filter(from_rest(chain));
    std::vector<double> response, piece(1, 1.0), out;
    while (response.size() < length) {
        out.resize(filter->outputs_for(piece.size()));
        filter->process(piece, out);
        response.insert(response.end(), out.begin(), out.end());
        piece.assign(static_cast<std::size_t>(piece_samples), 0.0);
    }
    response.resize(length);
    return response;
}

std::optional<std::int64_t> flush_samples(const FilterChain& chain, double full_scale, double half_step) {
    return flush_samples_within(chain, full_scale, half_step, most_impulse_samples);
}

std::optional<std::int64_t> flush_samples_within(const FilterChain& chain, double full_scale, double half_step,
                                                 std::int64_t most) {
    if (const auto split = split_at_median(chain)) return flush_around_median(*split, full_scale, half_step, most);
    const double limit = half_step / full_scale * (1.0 - slack);
    if (!(limit > 0.0)) return std::nullopt;
    if (!changes_rate(chain)) return flush_of_steady_rate(chain, limit, most);
    const auto zeros = flush_of_changing_rate(chain, limit);
    return zeros && *zeros <= most ? zeros : std::nullopt;
}

double l1_norm(const FilterChain& chain, double tail) {
    if (const auto split = split_at_median(chain)) return l1_norm(split->before, tail) * l1_norm(split->behind, tail);
    return changes_rate(chain) ? l1_of_changing_rate(chain, tail) : l1_of_steady_rate(chain, tail);
}

}  // namespace halflsb
