#include "runner/paper_headroom.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/cic_registers.hpp"
#include "oracle/arithmetic/every_word.hpp"
#include "oracle/arithmetic/named_coefficients.hpp"
#include "oracle/arithmetic/node_impulse.hpp"
#include "oracle/filters/cic.hpp"

namespace halflsb {
namespace {

/// Whole steps from lowest to highest; none beyond any word.
std::optional<int> bits_for(double lowest, double highest) {
    for (int bits = 1; bits < any_bits; ++bits) {
        const double half = std::ldexp(1.0, bits - 1);
        if (std::ceil(lowest) >= -half && std::floor(highest) <= half - 1.0) return bits;
    }
    return std::nullopt;
}

/// The sums of what is above and what is below 0 in an impulse response.
struct Sums {
    double positive = 0.0, negative = 0.0;
    double l1() const { return positive - negative; }
};

Sums sums_of(const std::vector<double>& h) {
    Sums sums;
    for (std::size_t n = h.size(); n-- > 0;) (h[n] < 0.0 ? sums.negative : sums.positive) += h[n];
    return sums;
}

/// All but a ten-thousandth of the sum.
std::size_t reaching_length(const std::vector<double>& h, double l1) {
    double left = l1;
    std::size_t length = 0;
    while (length < h.size() && left > 1e-4 * l1) left -= std::fabs(h[length++]);
    return length;
}

void add_stimulus(std::vector<double> h, double full_scale, PredictedNode& node) {
    h.resize(reaching_length(h, sums_of(h).l1()));
    for (std::size_t n = h.size(); n-- > 0;) node.signs += h[n] < 0.0 ? '-' : '+';
    node.reached = sums_of(h).l1() * full_scale;
}

/// The top code is a step below full scale, and words hold whole steps: a mean of 16-bit words needs 16 bits. What is
/// not in the impulse response (a partial sum, what rings for longer) may come on top at either end.
void add_needs(const std::vector<double>& h, double lowest_in, double highest_in, PredictedNode& node) {
    double lowest = -node.worst, highest = node.worst;
    if (!h.empty()) {
        const Sums sums = sums_of(h);
        const double beyond = std::max(0.0, node.worst - sums.l1() * -lowest_in);
        // Sums of doubles: a whole number must not become a little more.
        const double slack = 1e-9 * node.worst + beyond;
        lowest = std::max(lowest, sums.positive * lowest_in + sums.negative * highest_in - slack);
        highest = std::min(highest, sums.positive * highest_in + sums.negative * lowest_in + slack);
    }
    node.bits_needed = bits_for(lowest - node.error, highest + node.error);
    if (node.bits_needed) node.integer_bits_needed = *node.bits_needed - 1 - node.fraction_bits;
}

/// That two's complement takes for the largest of them.
int bits_of_coefficients(const DescribedStage& stage) {
    int needed = 1;
    for (const NamedCoefficient& coefficient : named_coefficients(stage)) {
        const std::int64_t stored = stored_coefficient(stage, coefficient.value);
        int bits = 1;
        while (bits < 64 && (stored >= 0 ? stored >> (bits - 1) : (-stored - 1) >> (bits - 1)) != 0) ++bits;
        needed = std::max(needed, bits);
    }
    return needed;
}

}  // namespace

std::vector<PredictedNode> predict_nodes(const DescribedChain& described) {
    const DescribedChain chain = with_every_word(described);
    const Port& in = chain.stages.front().in;
    std::vector<PredictedNode> nodes;
    const RailWatch watch(chain);
    for (const RailNode& rail : watch.nodes()) {
        const double step = step_of(rail.word);
        PredictedNode node;
        node.name = rail.name;
        node.fraction_bits = rail.word.fraction_bits;
        node.overflow = rail.word.overflow;
        node.worst = rail.worst_case / step;
        node.error = rail.error / step;
        node.effect = rail.effect;
        std::vector<double> h;
        if (!in.is_float) h = node_impulse(chain, node.name, most_signs);
        for (double& value : h) value /= step;
        add_needs(h, lowest_value(in.word), highest_value(in.word), node);
        add_stimulus(std::move(h), -lowest_value(in.word), node);
        if (rail.word.bits != any_bits) {
            node.bits = rail.word.bits;
            node.is_reachable = !node.bits_needed || *node.bits_needed > *node.bits;
            node.rail_ratio = node.worst / (-lowest_value(rail.word) / step);
        }
        nodes.push_back(std::move(node));
    }
    return nodes;
}

std::vector<PredictedRegister> predict_registers(const DescribedChain& described) {
    std::vector<PredictedRegister> all;
    for (std::size_t i = 0; i < described.stages.size(); ++i) {
        const DescribedStage& stage = described.stages[i];
        std::vector<int> may_discard;
        if (const auto* cic = std::get_if<CicDecimator>(&stage.stage.design)) {
            const int finer = stage.in.word.fraction_bits - stage.out.word.fraction_bits;
            may_discard = hogenauer_discards(*cic, std::ldexp(divisor_of(*cic), finer));
        }
        const std::vector<CicRegister> registers = cic_registers(stage);
        for (std::size_t j = 0; j < registers.size(); ++j) {
            const CicRegister& each = registers[j];
            PredictedRegister told;
            told.name = "stage " + std::to_string(i + 1) + ", " + each.name;
            if (each.word.bits != wide_bits) told.bits = each.word.bits;
            told.fraction_bits = each.word.fraction_bits;
            told.overflow = each.word.overflow;
            told.bits_needed = each.bits_needed;
            told.discarded_bits = each.discarded_bits;
            if (j < may_discard.size()) told.may_discard_bits = may_discard[j];
            all.push_back(std::move(told));
        }
    }
    return all;
}

std::vector<PredictedCoefficients> predict_coefficients(const DescribedChain& described) {
    std::vector<PredictedCoefficients> all;
    for (std::size_t i = 0; i < described.stages.size(); ++i) {
        const DescribedStage& stage = described.stages[i];
        if (stage.number != NumberKind::integer || !stage.stage.coefficient_fraction_bits) continue;
        if (named_coefficients(stage).empty()) continue;
        all.push_back({i + 1, stage.coefficient_fraction_bits, bits_of_coefficients(stage),
                       stage.stage.arithmetic.coefficient_bits});
    }
    return all;
}

}  // namespace halflsb
