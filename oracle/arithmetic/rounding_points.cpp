// Which sums each structure has, and where they go: docs/arithmetic.md, "Stages".
#include "oracle/arithmetic/rounding_points.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <limits>

#include "oracle/arithmetic/family.hpp"
#include "oracle/arithmetic/sum_points.hpp"

namespace halflsb {

namespace {

using Place = RoundingPoint::Place;

constexpr double unlimited = std::numeric_limits<double>::infinity();

double power_of_two(int exponent) { return std::ldexp(1.0, exponent); }

class StagePoints {
public:
    StagePoints(const DescribedChain& chain, const ExactChain& exact, std::size_t index)
        : stage_(chain.stages[index]), exact_(exact), index_(index), sums_(stage_, index) {}

    std::vector<RoundingPoint> find() {
        const FilterDesign& design = exact_.stages[exact_.first_of[index_]].design;
        if (const auto* fir = std::get_if<Fir>(&design)) {
            of_fir(*fir);
        } else if (const auto* average = std::get_if<MovingAverage>(&design)) {
            of_average(*average);
        } else if (const auto* comb = std::get_if<Comb>(&design)) {
            of_comb(*comb);
        } else if (const auto* cascade = std::get_if<BiquadCascade>(&design)) {
            of_cascade(*cascade);
        }
        return std::move(sums_.points);
    }

private:
    void of_fir(const Fir& fir) {
        std::vector<Term> terms;
        for (const double tap : fir.taps) terms.push_back(term(tap, stage_.in.word));
        SumTarget target = behind("sum");
        target.saves_fraction = stage_.fraction_saving;
        sums_.add_sum(std::move(terms), target);
    }

    // S / points, or S R 2^-f, in steps of the output.
    void of_average(const MovingAverage& average) {
        SumTarget target = behind("division");
        target.saves_fraction = stage_.fraction_saving;
        int bits = stage_.in.word.fraction_bits - stage_.out.word.fraction_bits;
        double parts = 0.0;
        if (stage_.division == Division::reciprocal) {
            const std::int64_t stored = stored_coefficient(stage_, 1.0 / average.points);
            bits += stage_.coefficient_fraction_bits - std::countr_zero(static_cast<std::uint64_t>(stored));
            parts = power_of_two(std::max(0, bits));
        } else {
            // The powers of two of points stand with the bits; what is odd divides nothing away.
            int points = average.points;
            for (; points % 2 == 0; points /= 2) ++bits;
            parts = points * power_of_two(std::max(0, bits));
        }
        const double top =
            std::ldexp(1.0, stage_.in.word.bits - 1 - stage_.in.word.fraction_bits + stage_.out.word.fraction_bits);
        const bool is_exact = !target.saves_fraction && stage_.division != Division::reciprocal;
        sums_.add_shortening(target, {parts, is_exact ? -top : -unlimited, is_exact ? top : unlimited});
    }

    void of_comb(const Comb& comb) {
        SumTarget target = at_section("sum", 0, Place::loop);
        target.saves_fraction = stage_.fraction_saving;
        target.fraction_bits = stage_.state.fraction_bits;
        sums_.add_sum({term(comb.direct, stage_.in.word), term(comb.forward, stage_.in.word),
                       feedback(comb.feedback, stage_.state)},
                      target);
        add_output(0);
    }

    void of_cascade(const BiquadCascade& cascade) {
        in_ = stage_.in.word;
        for (std::size_t j = 0; j < cascade.sections.size(); ++j) {
            const BiquadSection& s = cascade.sections[j];
            bool stays_wide = false;
            if (stage_.structure == Structure::direct_2) {
                of_direct_2(s, j);
            } else if (stage_.structure == Structure::transposed_2) {
                of_transposed(s, j);
            } else {
                if (stage_.structure == Structure::direct_1) of_direct_1(s, j);
                if (stage_.structure == Structure::difference) of_difference(s);
                if (stage_.structure == Structure::leak) of_leak(s);
                stays_wide = stage_.rounding_at == RoundingAt::output && j + 1 < cascade.sections.size();
                if (!stays_wide) add_output(j);
            }
            in_ = stays_wide ? stage_.state : stage_.out.word;
        }
    }

    void of_direct_1(const BiquadSection& s, std::size_t j) {
        SumTarget target = at_section("sum", j, Place::loop);
        target.saves_fraction = stage_.fraction_saving;
        target.fraction_bits = stage_.state.fraction_bits;
        sums_.add_sum({term(s.b0, in_), term(s.b1, in_), term(s.b2, in_), feedback(s.a1, stage_.state),
                       feedback(s.a2, stage_.state)},
                      target);
    }

    void of_direct_2(const BiquadSection& s, std::size_t j) {
        const Word& state = stage_.state;
        SumTarget first = at_section("state", j, Place::entry);
        first.saves_fraction = stage_.fraction_saving;
        first.fraction_bits = state.fraction_bits;
        first.from_input = path_to_state(exact_.stages, first.node);
        sums_.add_sum({whole(in_), feedback(s.a1, state), feedback(s.a2, state)}, first);
        SumTarget second = at_section("output", j, Place::behind);
        second.saves_fraction = stage_.fraction_saving;
        second.rounding = stage_.output_rounding;
        second.from_input_of_terms = first.from_input;
        sums_.add_sum({term(s.b0, state), term(s.b1, state), term(s.b2, state)}, second);
    }

    // What the states lose comes in at the summing point of y, a sample or two later.
    void of_transposed(const BiquadSection& s, std::size_t j) {
        sums_.add_sum({whole(stage_.state), term(s.b0, in_)}, at_section("output", j, Place::loop));
        SumTarget first = at_section("state 1", j, Place::loop), second = at_section("state 2", j, Place::loop);
        first.fraction_bits = second.fraction_bits = stage_.state.fraction_bits;
        sums_.add_sum({whole(stage_.state), term(s.b1, in_), feedback(s.a1, stage_.out.word)}, first);
        sums_.add_sum({term(s.b2, in_), feedback(s.a2, stage_.out.word)}, second);
    }

    void of_difference(const BiquadSection& s) {
        const Word difference{wide_bits, std::max(in_.fraction_bits, stage_.state.fraction_bits)};
        SumTarget target = at_section("product", 0, Place::loop);
        target.fraction_bits = stage_.state.fraction_bits;
        sums_.add_sum({term(s.b0, difference)}, target);
    }

    void of_leak(const BiquadSection& s) {
        SumTarget target = at_section("product of input", 0, Place::loop);
        target.fraction_bits = stage_.state.fraction_bits;
        sums_.add_product(term(s.b0, in_), target, 1.0);
        target.what = "product of state";
        target.from_input_of_terms = target.from_input;
        sums_.add_product(term(s.b0, stage_.state), target, -1.0);
    }

    /// From state words to output words.
    void add_output(std::size_t j) {
        const int bits = stage_.state.fraction_bits - stage_.out.word.fraction_bits;
        if (bits <= 0) return;
        SumTarget target = at_section("output", j, Place::behind);
        target.rounding = stage_.output_rounding;
        sums_.add_shortening(target, {power_of_two(bits), -unlimited, unlimited});
    }

    Term whole(const Word& word) const { return {1.0, 1, word.fraction_bits, word}; }

    Term term(double coefficient, const Word& word) const {
        const int bits = stage_.coefficient_fraction_bits;
        const bool is_known = stage_.coefficients_are_said;
        return {coefficient, is_known ? static_cast<std::int64_t>(std::ldexp(coefficient, bits)) : 1,
                word.fraction_bits + bits, word};
    }

    Term feedback(double a, const Word& word) const {
        const bool is_subtracted = stage_.feedback_coefficients == FeedbackCoefficients::subtracted;
        Term product = term(is_subtracted ? a : -a, word);
        product.is_feedback = true;
        product.is_subtracted = is_subtracted;
        return product;
    }

    FilterChain exact_up_to(std::size_t stage) const {
        const auto first = exact_.stages.begin();
        return FilterChain(first, first + static_cast<std::ptrdiff_t>(exact_.first_of[stage]));
    }

    SumTarget behind(std::string what) const {
        SumTarget target;
        target.what = std::move(what);
        target.node.stage = exact_.first_of[index_ + 1] - 1;
        target.fraction_bits = stage_.out.word.fraction_bits;
        target.rounding = stage_.rounding;
        target.from_input = exact_up_to(index_ + 1);
        target.from_input_of_terms = exact_up_to(index_);
        return target;
    }

    SumTarget at_section(std::string what, std::size_t section, Place place) const {
        SumTarget target = behind(std::move(what));
        if (family_of(stage_.stage) == Family::sections) {
            target.what = "section " + std::to_string(section + 1) + ", " + target.what;
        }
        target.place = place;
        target.node = {exact_.first_of[index_], section, false};
        target.from_input = path_from_input(exact_.stages, target.node);
        if (section > 0) target.from_input_of_terms = path_from_input(exact_.stages, {target.node.stage, section - 1});
        return target;
    }

    const DescribedStage& stage_;
    const ExactChain& exact_;
    std::size_t index_;
    Word in_ = {};  ///< of the section at hand
    SumPoints sums_;
};

}  // namespace

std::vector<RoundingPoint> rounding_points(const DescribedChain& chain, const ExactChain& exact) {
    std::vector<RoundingPoint> all;
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        if (chain.stages[i].number == NumberKind::float32) continue;
        for (RoundingPoint& point : StagePoints(chain, exact, i).find()) all.push_back(std::move(point));
    }
    return all;
}

FilterChain path_of(const RoundingPoint& point, const FilterChain& chain) {
    FilterChain path;
    if (point.saves_fraction) path.push_back(FilterStage{Fir{{1.0, -1.0}}, std::nullopt, {}, "fir", {}});
    const FilterChain rest = point.place == RoundingPoint::Place::entry ? path_from_section(chain, point.node)
                                                                        : path_to_output(chain, point.node);
    path.insert(path.end(), rest.begin(), rest.end());
    return path;
}

}  // namespace halflsb
