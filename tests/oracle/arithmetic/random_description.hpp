// Random filters in random arithmetic of whole numbers, for tests that must hold for any.
#pragma once

#include <string>

#include "oracle/arithmetic/described.hpp"
#include "oracle/filters/coefficients.hpp"
#include "oracle/filters/stability.hpp"
#include "tests/oracle/support.hpp"

namespace halflsb::testing {

struct RandomChain {
    FilterChain stages;
    SampleFormat in, out;
    DescribedChain described;
};

inline Rounding random_rounding(Random& random) { return static_cast<Rounding>(random.whole(0, 4)); }

template <class Value>
Value one_of(Random& random, std::initializer_list<Value> all) {
    return *(all.begin() + random.whole(0, static_cast<std::int64_t>(all.size()) - 1));
}

inline bool chance(Random& random, int percent) { return random.whole(1, 100) <= percent; }

inline BiquadSection random_section(Random& random, double largest_radius) {
    const double radius = std::sqrt(random.between(0.0, largest_radius * largest_radius));
    const double angle = random.between(0.0, 3.14159265358979323846);
    BiquadSection s{random.ratio(), random.ratio(), random.ratio(), -2.0 * radius * std::cos(angle), radius * radius};
    if (chance(random, 25)) s = {s.b0, s.b1, 0.0, random.ratio() * largest_radius, 0.0};
    if (chance(random, 10)) s.b2 = s.b0;
    return s;
}

inline std::vector<double> product_of(const std::vector<double>& a, const std::vector<double>& b) {
    std::vector<double> product(a.size() + b.size() - 1, 0.0);
    for (std::size_t i = 0; i < a.size(); ++i) {
        for (std::size_t j = 0; j < b.size(); ++j) product[i + j] += a[i] * b[j];
    }
    return product;
}

/// Without `all`: no recursion and no median.
inline FilterStage random_design(Random& random, bool all) {
    FilterStage stage;
    StageArithmetic& said = stage.arithmetic;
    std::int64_t kind = random.whole(0, 11);
    if (!all && (kind == 7 || kind == 8)) kind = 9;
    stage.coefficient_fraction_bits = static_cast<int>(random.whole(4, 26));
    if (kind <= 1) {
        Fir fir;
        const std::int64_t count = random.whole(1, chance(random, 30) ? 40 : 6);
        const double scale = std::ldexp(1.0, -static_cast<int>(random.whole(0, 4)));
        for (std::int64_t k = 0; k < count; ++k) fir.taps.push_back(scale * random.ratio());
        stage.design = fir;
        stage.kind = "fir";
    } else if (kind <= 3) {
        stage.design = MovingAverage{static_cast<int>(random.whole(1, chance(random, 30) ? 200 : 20))};
        stage.kind = "moving-average";
        const auto division = one_of(random, {Division::divide, Division::divide, Division::reciprocal});
        said.division = division;
        if (division != Division::reciprocal) stage.coefficient_fraction_bits.reset();
    } else if (kind <= 5) {
        BiquadCascade cascade;
        const bool shifts = chance(random, 40);
        const double k = shifts ? std::ldexp(1.0, -static_cast<int>(random.whole(1, 8))) : random.between(0.01, 0.99);
        cascade.sections.push_back({k, 0.0, 0.0, k - 1.0, 0.0});
        stage.design = cascade;
        stage.kind = "one-pole";
        if (shifts) stage.coefficient_fraction_bits.reset();
        said.structure = one_of(random, {Structure::difference, Structure::leak, Structure::direct_1});
    } else if (kind == 6) {
        stage.design = Comb{static_cast<int>(random.whole(1, 9)), random.ratio(), random.ratio(), 0.9 * random.ratio()};
        stage.kind = "comb";
    } else if (kind == 7) {
        Recursion recursion{{random.ratio()}, {1.0}};
        for (std::int64_t j = random.whole(1, 2); j > 0; --j) {
            const BiquadSection s = random_section(random, 0.85);
            recursion.b = product_of(recursion.b, {s.b0, s.b1, s.b2});
            recursion.a = product_of(recursion.a, {1.0, s.a1, s.a2});
        }
        stage.design = recursion;
        stage.kind = "iir";
        said.structure = one_of(random, {Structure::direct_1, Structure::direct_2, Structure::transposed_2});
    } else if (kind == 8) {
        stage.design = Median{static_cast<int>(random.whole(1, 9))};
        stage.kind = "median";
        stage.coefficient_fraction_bits.reset();
    } else {
        BiquadCascade cascade;
        const double radius = chance(random, 20) ? 0.998 : 0.95;
        for (std::int64_t j = random.whole(1, 3); j > 0; --j)
            cascade.sections.push_back(random_section(random, radius));
        stage.design = cascade;
        stage.kind = "biquad-cascade";
        said.structure = one_of(random, {Structure::direct_1, Structure::direct_2, Structure::transposed_2});
    }
    return stage;
}

inline void random_arithmetic(Random& random, FilterStage& stage) {
    StageArithmetic& said = stage.arithmetic;
    said.rounding = random_rounding(random);
    if (chance(random, 30)) said.output_rounding = random_rounding(random);
    said.rounding_at = one_of(random, {RoundingAt::sum, RoundingAt::sum, RoundingAt::product, RoundingAt::output});
    said.fraction_saving = chance(random, 25);
    said.feedback_coefficients = one_of(random, {FeedbackCoefficients::added, FeedbackCoefficients::subtracted});
    said.coefficient_rounding = random_rounding(random);
    if (chance(random, 25)) said.accumulator_fraction_bits = static_cast<int>(random.whole(10, 40));
    if (chance(random, 40)) {
        said.state_bits = 64;
        said.state_fraction_bits = static_cast<int>(random.whole(8, 34));
    }
    said.summation = one_of(random, {Summation::newest_first, Summation::oldest_first});
}

inline bool is_stable_as_stored(const FilterStage& stage) {
    const FilterStage stored = with_rounded_coefficients(stage);
    if (const auto* comb = std::get_if<Comb>(&stored.design)) return std::fabs(comb->feedback) < 1.0;
    if (std::holds_alternative<Recursion>(stored.design)) return largest_pole_radius({stored}) < 0.98;
    const auto* cascade = std::get_if<BiquadCascade>(&stored.design);
    if (cascade == nullptr) return true;
    for (const BiquadSection& s : cascade->sections)
        if (!is_stable(s)) return false;
    return true;
}

/// Words that a signal can fill: narrow accumulators and states, saturating and wrapping.
inline void random_narrow_words(Random& random, FilterStage& stage) {
    StageArithmetic& said = stage.arithmetic;
    const auto overflow = [&] { return one_of(random, {Overflow::saturate, Overflow::saturate, Overflow::wrap}); };
    said.output_overflow = overflow();
    if (chance(random, 50)) said.state_overflow = overflow();
    said.accumulator_overflow = overflow();
    if (chance(random, 60)) said.accumulator_bits = static_cast<int>(random.whole(14, 64));
    if (said.state_bits && chance(random, 60)) said.state_bits = static_cast<int>(random.whole(12, 40));
}

/// Chains of one or two stages whose coefficients as stored are stable, between words of 8 to 32 bits.
inline RandomChain random_chain(Random& random, bool is_narrow = false) {
    for (;;) {
        RandomChain made;
        made.in = *sample_format(one_of<std::string_view>(random, {"q7", "q15", "i8", "i16", "u12", "i24"}));
        made.out = *sample_format(made.in.family == FormatFamily::q
                                      ? one_of<std::string_view>(random, {"q7", "q15", "q31"})
                                      : one_of<std::string_view>(random, {"i8", "i16", "i24", "i32"}));
        const std::int64_t count = chance(random, 30) ? 2 : 1;
        bool is_stable = true;
        for (std::int64_t i = 0; i < count; ++i) {
            FilterStage stage = random_design(random, is_narrow);
            random_arithmetic(random, stage);
            if (is_narrow) random_narrow_words(random, stage);
            if (i + 1 < count) stage.arithmetic.stage_format = made.out;
            is_stable = is_stable && is_stable_as_stored(stage);
            made.stages.push_back(std::move(stage));
        }
        if (!is_stable) continue;
        auto described = describe(made.stages, made.in, made.out, 1.0);
        if (!described.described || described.described->missing) continue;
        made.described = std::move(*described.described);
        return made;
    }
}

inline RandomChain random_narrow_chain(Random& random) { return random_chain(random, true); }

/// Values of the words of the first stage.
inline std::vector<double> values_of_words(const DescribedChain& chain, const std::vector<Code>& words) {
    std::vector<double> values;
    for (const Code word : words) {
        values.push_back(std::ldexp(static_cast<double>(word), -chain.stages.front().in.word.fraction_bits));
    }
    return values;
}

/// For messages.
inline std::string text_of(const RandomChain& chain) {
    std::string text = std::string(chain.in.name) + " to " + std::string(chain.out.name);
    for (const DescribedStage& s : chain.described.stages) {
        text += "; " + s.stage.kind + " " + std::string(name_of(s.structure)) + " at " +
                std::string(name_of(s.rounding_at)) + " " + std::string(name_of(s.rounding)) + "/" +
                std::string(name_of(s.output_rounding)) + " f " + std::to_string(s.coefficient_fraction_bits) +
                " state " + std::to_string(s.state.fraction_bits) + " acc " +
                std::to_string(s.accumulator_fraction_bits.value_or(-1)) + "/" + std::to_string(s.accumulator_bits) +
                std::string(name_of(s.accumulator_overflow)) + " out " + std::string(name_of(s.out.word.overflow)) +
                " state " + std::string(name_of(s.state.overflow)) + std::to_string(s.state.bits) +
                (s.fraction_saving ? " saving" : "");
    }
    return text;
}

}  // namespace halflsb::testing
