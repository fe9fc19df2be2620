// Maximum length sequences of two levels, by the polynomials of ITU-T Recommendation O.150 (05/96),
// section 5 and table 1: a register of `order` stages, the modulo-2 sum of stage `tap` and of the last one
// fed back to the first, x^order + x^tap + 1. What is sent is the last stage, inverted for the orders
// whose signal the Recommendation inverts.
//
//   order 9, tap 5    11, 9    15, 14 inverted    20, 3    23, 18 inverted    31, 28 inverted
//
// The period is 2^order - 1 samples. Stage k is bit k - 1 of the register. A ONE is the level, a ZERO its
// negative. The register begins with ones in all stages, as section 5.1 has it for order 9; the
// Recommendation leaves the others free. (All of this as texts that quote the Recommendation have it; the document
// itself was not at hand.)
#include <array>

#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

struct Polynomial {
    int order, tap;
    bool inverted;
};

constexpr std::array<Polynomial, 6> polynomials = {
    {{9, 5, false}, {11, 9, false}, {15, 14, true}, {20, 3, false}, {23, 18, true}, {31, 28, true}}};

using Register = std::uint32_t;

std::uint64_t period_of(const Polynomial& polynomial) { return (std::uint64_t{1} << polynomial.order) - 1; }

Register stepped(const Polynomial& polynomial, Register state) {
    const Register fed_back = (state >> (polynomial.tap - 1) ^ state >> (polynomial.order - 1)) & 1U;
    return (state << 1 | fed_back) & static_cast<Register>(period_of(polynomial));
}

/// A square matrix over GF(2): column k is what becomes of a register with only bit k set.
using Matrix = std::array<Register, 31>;

Register product(const Matrix& matrix, Register state) {
    Register sum = 0;
    for (std::size_t k = 0; state != 0; ++k, state >>= 1) {
        if ((state & 1U) != 0) sum ^= matrix[k];
    }
    return sum;
}

class Prbs final : public PlacedStimulus {
public:
    Prbs(const Placement& placement, const Polynomial& polynomial, Register start)
        : PlacedStimulus(placement), polynomial_(polynomial), start_(start) {
        const auto order = static_cast<std::size_t>(polynomial.order);
        for (std::size_t k = 0; k < order; ++k) jumps_[0][k] = stepped(polynomial, Register{1} << k);
        for (std::size_t power = 1; power < order; ++power) {
            for (std::size_t k = 0; k < order; ++k) {
                jumps_[power][k] = product(jumps_[power - 1], jumps_[power - 1][k]);
            }
        }
    }

    /// White to an estimator that does not resolve the lines of the period. Over eight periods or more the
    /// short ones are resolved: what has power are the lines themselves, all equally strong (but for that
    /// at 0, which is weaker by the period).
    Spectrum spectrum() const override {
        constexpr std::uint64_t longest_in_lines = 2047;
        const std::uint64_t period = period_of(polynomial_);
        if (period > longest_in_lines || static_cast<std::uint64_t>(placement().own_samples()) < 8 * period) {
            return {.bands = {{0.0, 0.5}}, .tones = {}};
        }
        Spectrum lines;
        for (std::uint64_t k = 1; 2 * k < period; ++k) {
            lines.tones.push_back(static_cast<double>(k) / static_cast<double>(period));
        }
        return lines;
    }

private:
    /// The register after `count` steps: a matrix for each power of two in it.
    Register jumped(std::uint64_t count) const {
        Register state = start_;
        count %= period_of(polynomial_);
        for (std::size_t power = 0; count != 0; ++power, count >>= 1) {
            if ((count & 1U) != 0) state = product(jumps_[power], state);
        }
        return state;
    }

    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        Register state = jumped(static_cast<std::uint64_t>(first_own_index));
        const double of_one = polynomial_.inverted ? -placement().level_ratio : placement().level_ratio;
        for (double& ratio : ratios) {
            ratio = (state >> (polynomial_.order - 1) & 1U) != 0 ? of_one : -of_one;
            state = stepped(polynomial_, state);
        }
    }

    Polynomial polynomial_;
    Register start_;
    std::array<Matrix, 31> jumps_{};  ///< 1, 2, 4, 8 ... steps
};

StimulusOutcome make_prbs(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const std::int64_t order = values.integer(recipe, "order").value_or(0);
    for (const Polynomial& polynomial : polynomials) {
        if (polynomial.order != order) continue;
        const auto largest = static_cast<std::int64_t>(period_of(polynomial));
        const std::int64_t start = values.integer(recipe, "register_seed").value_or(largest);
        if (start > largest) {
            return refused(
                "register_seed",
                std::to_string(start) + " needs more than the " + std::to_string(order) + " stages of the register",
                "give a whole number from 1 to " + std::to_string(largest));
        }
        return std::unique_ptr<const Stimulus>(
            std::make_unique<Prbs>(*placement, polynomial, static_cast<Register>(start)));
    }
    return refused("order", std::to_string(order) + " is not an order of ITU-T O.150", "give 9, 11, 15, 20, 23 or 31");
}

}  // namespace

Shape prbs_shape() {
    std::vector<Parameter> parameters = {
        {.name = "order",
         .type = ParameterType::integer,
         .minimum = 9.0,
         .maximum = 31.0,
         .default_value = 15.0,
         .help = "Stages of the register, 9, 11, 15, 20, 23 or 31; the sequence repeats after 2^order - 1 samples."},
        {.name = "register_seed",
         .type = ParameterType::integer,
         .minimum = 1.0,
         .maximum = 2147483647.0,
         .help = "The register at at_samples, stage k as bit k - 1, below 2^order; all ones when left out."},
    };
    const auto placement =
        placement_parameters(LevelSign::positive, 0.5, "The level of a ONE; a ZERO is its negative.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    return {{.name = "prbs",
             .help = "A maximum length sequence of two levels by ITU-T O.150, inverted for the orders 15, 23 and 31.",
             .parameters = std::move(parameters)},
            make_prbs};
}

}  // namespace halflsb
