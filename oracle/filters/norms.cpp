// What a filter does to one sample, how large its output can get, and how long it remembers.
#include <cmath>
#include <cstdint>

#include "oracle/filters/filter.hpp"
#include "oracle/filters/impulse_run.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t most_samples = std::int64_t{1} << 24;
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

}  // namespace

std::vector<double> impulse_response(const FilterChain& chain, std::size_t length) {
    std::vector<double> response(length, 0.0);
    if (length > 0) response[0] = 1.0;
    make_filter(chain)->process(response, response);
    return response;
}

std::optional<std::int64_t> flush_samples(const FilterChain& chain, double full_scale, double half_step) {
    const double limit = half_step / full_scale * (1.0 - slack);
    if (!(limit > 0.0)) return std::nullopt;
    // Run until the rest does not matter. That takes more samples than the answer, hence twice the most.
    ImpulseRun run(chain);
    std::vector<double> sums;
    do {
        if (static_cast<std::int64_t>(sums.size()) * piece_samples >= 2 * most_samples) return std::nullopt;
        sums.push_back(sum_of_sizes(run.next()));
    } while (!(run.rest() <= slack * limit));

    double behind = run.rest();
    std::size_t piece = sums.size() - 1;
    while (piece > 0 && behind + sums[piece] < limit) behind += sums[piece--];
    const std::int64_t start = start_of_tail_in(chain, piece, behind, limit);
    // The newest sample of the past is one older than the first zero.
    const std::int64_t zeros = start > 0 ? start - 1 : 0;
    return zeros <= most_samples ? std::optional(zeros) : std::nullopt;
}

double l1_norm(const FilterChain& chain, double tail) {
    ImpulseRun run(chain);
    double sum = 0.0, last_quarter = 0.0;
    for (std::int64_t samples = 0; samples < most_samples; samples += piece_samples) {
        const double part = sum_of_sizes(run.next());
        sum += part;
        if (samples >= most_samples - most_samples / 4) last_quarter += part;
        if (run.rest() <= tail * sum) return sum;
    }
    // The slowest pole alone is left: each further quarter is a fixed fraction of the one before.
    const double decay = std::exp(0.25 * static_cast<double>(most_samples) * std::log(largest_pole_radius(chain)));
    return decay < 1.0 ? sum + last_quarter * decay / (1.0 - decay) : no_limit;
}

}  // namespace halflsb
