#include "oracle/filters/multirate_norms.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

#include "oracle/filters/impulse_run.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t longest_cycle = 4096;
constexpr std::int64_t most_samples = std::int64_t{1} << 20;
constexpr double slack = 0x1p-20;

/// Runs of a chain's responses, counted in samples of its fastest stage. Every stage alone stays below the most (a CIC
/// of factor 4096, order 8 and delay 2: 2.9e8); beyond it seconds would become minutes: 3105 responses behind a rise by
/// 3812 take 1e11. A piece is kept, so no chain may rise further than its 2^24 samples allow.
class Work {
public:
    Work(const FilterChain& chain, std::int64_t responses) {
        double rate = 1.0, fastest = 1.0;
        for (const FilterStage& stage : chain) fastest = std::max(fastest, rate = output_rate_hz(stage, rate));
        a_piece_ = fastest * static_cast<double>(ImpulseRun::piece_samples);
        // Response k has k zeros in front of it: half of them all on average.
        const double least =
            static_cast<double>(responses) * std::max(0.5 * static_cast<double>(responses) * fastest, a_piece_);
        is_too_much_ = a_piece_ > largest_piece || least > most;
    }
    void add_piece() { is_too_much_ = is_too_much_ || (done_ += a_piece_) > most; }
    bool is_too_much() const { return is_too_much_; }

private:
    static constexpr double most = 0x1p29, largest_piece = 0x1p24;
    double a_piece_ = 0.0, done_ = 0.0;
    bool is_too_much_ = false;
};

// The product over single stages: no output is larger, whatever the phases.
double product_of_norms(const FilterChain& chain, double tail) {
    double product = 1.0;
    for (const FilterStage& stage : chain) product *= l1_norm({stage}, tail);
    return product;
}

}  // namespace

std::optional<PhaseSums> sums_of_changing_rate(const FilterChain& chain, double tail) {
    const RateCycle cycle = rate_cycle(chain);
    if (cycle.inputs > longest_cycle || cycle.outputs > most_samples) return std::nullopt;
    Work work(chain, cycle.inputs);
    if (work.is_too_much()) return std::nullopt;
    std::vector<double> above(static_cast<std::size_t>(cycle.outputs), 0.0), below = above;
    double rest = 0.0;
    ImpulseRun run(chain);
    for (std::int64_t input = 0; input < cycle.inputs; ++input) {
        run.restart(static_cast<std::size_t>(input));
        std::size_t phase = 0;
        double sum = 0.0;
        for (std::int64_t done = 0;; done += static_cast<std::int64_t>(ImpulseRun::piece_samples)) {
            for (const double h : run.next()) {
                (h > 0.0 ? above : below)[phase] += h;
                sum += std::fabs(h);
                if (++phase == above.size()) phase = 0;
            }
            if (run.rest() <= tail * sum) break;
            work.add_piece();
            if (done > input + most_samples || work.is_too_much()) return std::nullopt;
        }
        rest += run.rest();
    }
    PhaseSums sums;
    for (std::size_t phase = 0; phase < above.size(); ++phase) {
        sums.sizes = std::max(sums.sizes, above[phase] - below[phase]);
        sums.positive = std::max(sums.positive, above[phase]);
        sums.negative = std::min(sums.negative, below[phase]);
    }
    sums.sizes += rest;
    sums.positive += rest;
    sums.negative -= rest;
    return sums;
}

double l1_of_changing_rate(const FilterChain& chain, double tail) {
    if (const auto sums = sums_of_changing_rate(chain, tail)) return sums->sizes;
    return chain.size() > 1 ? product_of_norms(chain, tail) : no_limit;
}

std::optional<std::int64_t> flush_of_changing_rate(const FilterChain& chain, double limit) {
    const RateCycle cycle = rate_cycle(chain);
    if (cycle.inputs > longest_cycle || cycle.outputs > most_samples) return std::nullopt;
    Work work(chain, cycle.inputs);
    if (work.is_too_much()) return std::nullopt;
    std::vector<double> largest;  // weight of an input that is `index` samples older than the newest one
    double rest = 0.0;
    ImpulseRun run(chain);
    for (std::int64_t input = 0; input < cycle.inputs; ++input) {
        run.restart(static_cast<std::size_t>(input));
        std::int64_t done = 0, output = 0;
        do {
            work.add_piece();
            if (done > input + 2 * most_samples || work.is_too_much()) return std::nullopt;
            const std::span<const double> piece = run.next();
            std::int64_t newest = done;  // input with which the next output comes
            for (const double h : piece) {
                while (outputs_after(chain, newest + 1) <= output) ++newest;
                ++output;
                if (newest < input) continue;
                const auto age = static_cast<std::size_t>(newest - input);
                if (age >= largest.size()) largest.resize(age + 1, 0.0);
                largest[age] = std::max(largest[age], std::fabs(h));
            }
            done += static_cast<std::int64_t>(ImpulseRun::piece_samples);
        } while (!(run.rest() <= slack * limit / static_cast<double>(cycle.inputs)));
        rest += run.rest();
    }
    double left = rest;
    std::size_t start = largest.size();  // the smallest age from which on all together stay below the limit
    while (start > 0 && left + largest[start - 1] < limit) left += largest[--start];
    // The newest sample of the past is one older than the first zero.
    const std::int64_t zeros = start > 0 ? static_cast<std::int64_t>(start) - 1 : 0;
    return (zeros + cycle.inputs - 1) / cycle.inputs * cycle.inputs;
}

}  // namespace halflsb
