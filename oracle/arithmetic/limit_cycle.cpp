#include "oracle/arithmetic/limit_cycle.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "oracle/arithmetic/chain_elements.hpp"
#include "oracle/arithmetic/family.hpp"
#include "oracle/arithmetic/float_points.hpp"
#include "oracle/arithmetic/path_sums.hpp"
#include "oracle/arithmetic/reference_error.hpp"
#include "oracle/arithmetic/state_search.hpp"
#include "oracle/arithmetic/twin.hpp"

namespace halflsb {

namespace {

// Nobody knows how long a running sum ran before the silence.
constexpr std::int64_t endless = std::numeric_limits<std::int64_t>::max();

std::int64_t whole_steps(double value, double step) {
    return static_cast<std::int64_t>(std::clamp(std::floor(value / step), 0.0, 0x1p62));
}

/// The element that is the first to go on by itself, by its place in the exact chain; nothing before it rounds zeros.
std::optional<FilterNode> first_that_remembers(const std::vector<ChainElement>& elements) {
    for (const ChainElement& element : elements) {
        // A running sum of float32 keeps what it has lost.
        const bool keeps_sum = !element.is_integer() && element.stage->structure == Structure::running_sum;
        // Integrators that discard go round for ever: what they hold is not 0 when the input is.
        const bool discards = !element.stage->discarded_bits.empty() && element.stage->discarded_bits.back() > 0;
        if (element.is_recursive() || element.stage->fraction_saving || keeps_sum || discards) return element.node;
    }
    return std::nullopt;
}

bool rounds_in_silence(const RoundingPoint& point, const FilterNode& first) {
    if (point.node.stage < first.stage) return false;
    if (point.node.stage > first.stage) return true;
    if (point.node.section < first.section) return false;
    return point.node.section > first.section || !point.is_of_input;
}

double at(const std::vector<double>& list, std::size_t k) { return k < list.size() ? list[k] : 0.0; }

DeadBandEstimate estimate_of(const ChainElement& element) {
    const DescribedStage& stage = *element.stage;
    const double a1 = at(element.feedback, 0), a2 = at(element.feedback, 1);
    DeadBandEstimate estimate{element.name, step_of(stage.state), 0, 0};
    const double products = stage.rounding_at == RoundingAt::product && a2 != 0.0 ? 2.0 : 1.0;
    const double slack = 1.0 + 1e-9;  // 0.5 / (1 - 0.9) must not become 4.999...
    if (a2 == 0.0) {
        estimate.oscillation = estimate.constant = whole_steps(0.5 * slack / (1.0 - std::fabs(a1)), 1.0);
    } else {
        estimate.oscillation = whole_steps(0.5 * slack / (1.0 - std::fabs(a2)), 1.0);
        estimate.constant = whole_steps(0.5 * products * slack / std::fabs(1.0 + a1 + a2), 1.0);
    }
    return estimate;
}

bool is_of_second_order(const ChainElement& element) { return element.has_sums() && element.feedback.size() <= 2; }

/// Bounds of the words of the twin's state when the input has been silent for long; none for another kind of chain.
std::optional<std::vector<std::int64_t>> state_limits(const ChainElement& element, double largest, std::size_t words) {
    const DescribedStage& stage = *element.stage;
    if (!element.is_integer() || !is_of_second_order(element) || stage.fraction_saving) return std::nullopt;
    const double a1 = std::fabs(at(element.feedback, 0)), a2 = std::fabs(at(element.feedback, 1));
    const auto state = [&](double value) { return whole_steps(value, step_of(stage.state)) + 1; };
    std::vector<std::int64_t> limits;
    if (stage.structure == Structure::transposed_2) {
        // s2 = -a2 y, s1 = s2 - a1 y, each with what its roundings lose.
        const double second = a2 * largest + 4.0 * step_of(stage.state);
        limits = {state(second + a1 * largest + 4.0 * step_of(stage.state)), state(second)};
    } else if (stage.structure == Structure::difference || stage.structure == Structure::leak) {
        limits = {state(largest)};
    } else {
        limits.assign(words, state(largest));
        // Direct form I keeps inputs in front, which are silent.
        const std::size_t fed_back = family_of(stage.stage) == Family::one_pole ? 1 : element.feedback.size();
        const std::size_t states = stage.structure == Structure::direct_1 ? fed_back : words;
        for (std::size_t k = 0; k + states < words; ++k) limits[k] = 0;
    }
    if (limits.size() != words) return std::nullopt;
    return limits;
}

double box_of(const std::vector<std::int64_t>& limits) {
    double states = 1.0;
    for (const std::int64_t limit : limits) states *= 2.0 * static_cast<double>(limit) + 1.0;
    return states;
}

/// The largest |state| of a section of direct form on zeros: its feedback roundings through 1 / A(z).
double largest_state(const ChainElement& element, const std::vector<RoundingPoint>& points) {
    double error = 0.0;
    for (const RoundingPoint& point : points) {
        if (point.place != RoundingPoint::Place::behind && !point.is_of_input) error += point.error.largest();
    }
    return error * l1_norm(element.loop());
}

}  // namespace

SilenceBound silence_bound(const DescribedChain& chain, std::int64_t most_states) {
    const ExactChain exact = exact_chain(chain);
    const auto elements = chain_elements(chain, exact);
    auto points = rounding_points(chain, exact);
    for (RoundingPoint& point : float_points(chain, exact, {endless, largest_value(chain.stages.front().in)}))
        points.push_back(std::move(point));
    SilenceBound bound;
    bound.step = step_of(chain.stages.back().out.word);
    if (const auto first = first_that_remembers(elements)) {
        for (const RoundingPoint& point : points) {
            if (!rounds_in_silence(point, *first)) continue;
            const PathSums sums = path_sums(path_of(point, exact.stages), 1, 1);
            const auto times = [](double factor, double amount) {
                return factor == 0.0 || amount == 0.0 ? 0.0 : factor * amount;
            };
            bound.lower += times(point.error.lowest, sums.positive) + times(point.error.highest, sums.negative);
            bound.upper += times(point.error.highest, sums.positive) + times(point.error.lowest, sums.negative);
        }
    }
    // Sums are run to 1e-12 of themselves: a code that lies on the bound counts.
    bound.lowest_code = -whole_steps(-bound.lower * (1.0 + 1e-9), bound.step);
    bound.highest_code = whole_steps(bound.upper * (1.0 + 1e-9), bound.step);
    for (const ChainElement& element : elements) {
        if (element.is_integer() && is_of_second_order(element) && element.is_recursive()) {
            bound.estimates.push_back(estimate_of(element));
        }
    }
    if (most_states <= 0 || elements.size() != 1 || !is_of_second_order(elements.front())) return bound;
    const auto twin = make_twin(chain);
    if (!twin) return bound;
    const auto limits = state_limits(elements.front(), largest_state(elements.front(), points), twin->state().size());
    if (!limits || box_of(*limits) > static_cast<double>(most_states)) return bound;
    if (const auto cycles = zero_input_cycles(chain, *limits); cycles && !cycles->empty()) {
        // The cycles that swing furthest stand first; ones that overflow are no part of what is proven.
        const ZeroInputCycle& widest = cycles->front();
        bound.searched = SearchedSilence{widest.lowest, widest.highest, widest.period_samples};
        for (const ZeroInputCycle& cycle : *cycles) {
            bound.searched->lowest = std::min(bound.searched->lowest, cycle.lowest);
            bound.searched->highest = std::max(bound.searched->highest, cycle.highest);
        }
    }
    return bound;
}

}  // namespace halflsb
