#include "oracle/judge/leftover.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <limits>
#include <vector>

#include "oracle/arithmetic/exact_chain.hpp"
#include "oracle/filters/impulse_run.hpp"
#include "oracle/filters/rates.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

constexpr std::size_t most_samples = std::size_t{1} << 22;
constexpr double small_rest = 1e-12;
constexpr double no_end = std::numeric_limits<double>::infinity();

/// sum |h[k]| over k > n for n = first, first + 1, ... until nearly nothing is left.
std::vector<double> tails_from(std::size_t first, const FilterChain& chain) {
    ImpulseRun run(chain);
    std::vector<double> sizes;
    double sum = 0.0;
    while (sizes.size() <= first || run.rest() > small_rest * sum) {
        if (sizes.size() >= most_samples) return {no_end};
        for (const double h : run.next()) {
            sizes.push_back(std::fabs(h));
            sum += sizes.back();
        }
    }
    double behind = run.rest();
    for (std::size_t n = sizes.size(); n-- > first;) {
        const double size = sizes[n];
        sizes[n] = behind;
        behind += size;
    }
    sizes.erase(sizes.begin(), sizes.begin() + static_cast<std::ptrdiff_t>(first));
    return sizes;
}

/// The last tap that is not stored as 0.
std::int64_t order_of(const Fir& fir, const DescribedStage& stage) {
    const bool is_stored = stage.number == NumberKind::integer && stage.coefficients_are_said;
    std::size_t count = fir.taps.size();
    while (count > 1) {
        const double tap = fir.taps[count - 1];
        if (is_stored ? stored_coefficient(stage, tap) != 0 : tap != 0.0) break;
        --count;
    }
    return static_cast<std::int64_t>(count) - 1;
}

/// A sum that never meets the end of its accumulator: one that saturates there is wrong ever after.
bool holds_all(const DescribedStage& stage, int points) {
    return stage.accumulator_overflow == Overflow::wrap ||
           stage.accumulator_bits >=
               stage.in.word.bits + static_cast<int>(std::bit_width(static_cast<unsigned>(points - 1)));
}

}  // namespace

std::optional<std::int64_t> samples_to_forget(const DescribedStage& stage) {
    if (stage.fraction_saving) return std::nullopt;
    const FilterDesign& design = stage.stage.design;
    if (const auto* fir = std::get_if<Fir>(&design)) return order_of(*fir, stage);
    if (const auto* median = std::get_if<Median>(&design)) return median->points - 1;
    const auto* average = std::get_if<MovingAverage>(&design);
    if (average == nullptr) return std::nullopt;
    const bool forgets = stage.structure == Structure::fresh_sum ||
                         (stage.number == NumberKind::integer && holds_all(stage, average->points));
    return forgets ? std::optional<std::int64_t>(average->points - 1) : std::nullopt;
}

std::optional<std::int64_t> samples_to_forget(const DescribedChain& chain) {
    std::int64_t all = 0;
    for (const DescribedStage& stage : chain.stages) {
        const auto samples = samples_to_forget(stage);
        if (!samples) return std::nullopt;
        all += *samples;
    }
    return all;
}

LeftoverUse leftover_use(const Plan& plan, const Case& the_case) {
    if (the_case.start == Start::reset) return {};
    return {the_case.start, the_case.start_samples, judged_samples(plan, the_case)};
}

Leftover leftover(const DescribedChain& chain, const Plan& plan, const Case& the_case) {
    if (the_case.start == Start::reset) return {};
    const auto forgotten = samples_to_forget(chain);
    if (forgotten && *forgotten <= the_case.start_samples) return {};
    const FilterChain exact = from_rest(exact_chain(chain).stages);
    if (!is_linear(exact) || changes_rate(exact)) {
        // flush_samples() holds for these too, and says no more.
        const double half = the_case.start == Start::flush
                                ? finest_step(plan.signal.output) / 2.0 / std::fabs(plan.signal.output_per_input)
                                : no_end;
        return {half, half, half};
    }
    const double full_scale = full_scale_value(plan.signal.input);
    const auto count = static_cast<double>(std::max<std::int64_t>(judged_samples(plan, the_case), 1));
    const auto tails = tails_from(static_cast<std::size_t>(the_case.start_samples), exact);
    double sum = 0.0, squares = 0.0, left = count;
    for (std::size_t n = 0; n < tails.size() && left > 0.0; ++n, left -= 1.0) {
        // Behind the last one computed there is less than it.
        const double times = n + 1 == tails.size() ? left : 1.0;
        sum += times * tails[n];
        squares += times * tails[n] * tails[n];
    }
    return {full_scale * tails.front(), full_scale * std::sqrt(squares / count), full_scale * sum / count};
}

}  // namespace halflsb
