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
    StagePoints(const DescribedChain& chain, const ExactChain& exact, std::size_t index, int in_spare)
        : stage_(chain.stages[index]),
          exact_(exact),
          index_(index),
          in_(stage_.in.word),
          in_spare_(in_spare),
          sums_(stage_, index) {}

    /// Of what find() has left the stage.
    int spare_out() const { return in_spare_; }

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
        } else if (const auto* recursion = std::get_if<Recursion>(&design)) {
            of_section({recursion->b, {recursion->a.begin() + 1, recursion->a.end()}}, 0, true);
        } else if (const auto* decimator = std::get_if<FirDecimator>(&design)) {
            of_fir(Fir{decimator->taps});
        } else if (const auto* interpolator = std::get_if<FirInterpolator>(&design)) {
            of_fir(Fir{interpolator->taps});
        } else {
            of_output_alone(design);
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
        set_spare_out(bits_of_products(fir.taps, in_bits()));
    }

    // S / points, or S R 2^-f, in steps of the output.
    void of_average(const MovingAverage& average) {
        SumTarget target = behind("division");
        target.saves_fraction = stage_.fraction_saving;
        int bits = stage_.in.word.fraction_bits - stage_.out.word.fraction_bits;
        double odd = 1.0;
        if (stage_.division == Division::reciprocal) {
            const std::int64_t stored = stored_coefficient(stage_, 1.0 / average.points);
            bits += stage_.coefficient_fraction_bits - std::countr_zero(static_cast<std::uint64_t>(stored));
        } else {
            // The powers of two of points stand with the bits; what is odd divides nothing away.
            int points = average.points;
            for (; points % 2 == 0; points /= 2) ++bits;
            odd = points;
        }
        const double top =
            std::ldexp(1.0, stage_.in.word.bits - 1 - stage_.in.word.fraction_bits + stage_.out.word.fraction_bits);
        const bool is_exact = !target.saves_fraction && stage_.division != Division::reciprocal;
        const auto parts_of = [odd](int fraction_bits) { return odd * power_of_two(std::max(0, fraction_bits)); };
        sums_.add_shortening(target, {parts_of(bits), is_exact ? -top : -unlimited, is_exact ? top : unlimited,
                                      parts_of(bits - in_spare_)});
        set_spare_out(stage_.out.word.fraction_bits + (odd == 1.0 ? bits - in_spare_ : 0));
    }

    void of_comb(const Comb& comb) {
        find_spare_of_state({});
        SumTarget target = at_section("sum", 0, Place::loop);
        target.saves_fraction = stage_.fraction_saving;
        target.fraction_bits = stage_.state.fraction_bits;
        sums_.add_sum({term(comb.direct, stage_.in.word), term(comb.forward, stage_.in.word),
                       feedback(comb.feedback, stage_.state)},
                      target);
        add_output(0);
        set_spare_out(stage_.state.fraction_bits - state_spare_);
    }

    // A median errs where it takes a mean of two, a CIC where it leaves its registers.
    void of_output_alone(const FilterDesign& design) {
        SumTarget target = behind("output");
        int bits = stage_.in.word.fraction_bits - stage_.out.word.fraction_bits;
        double parts = unlimited;
        if (const auto* median = std::get_if<Median>(&design)) {
            if (median->points % 2 == 0) ++bits;
            parts = power_of_two(std::max(0, bits));
        } else if (const auto* cic = std::get_if<CicDecimator>(&design); cic && cic->shift_bits) {
            parts = power_of_two(std::max(0, bits + *cic->shift_bits));
        } else if (const auto* raised = std::get_if<CicInterpolator>(&design); raised && raised->shift_bits) {
            parts = power_of_two(std::max(0, bits + *raised->shift_bits));
        }
        sums_.add_shortening(target, {parts, -unlimited, unlimited});
        in_spare_ = 0;
    }

    struct Section {
        std::vector<double> forward, feedback;  ///< b0 b1 ..., a1 a2 ...
    };

    void of_cascade(const BiquadCascade& cascade) {
        for (std::size_t j = 0; j < cascade.sections.size(); ++j) {
            const BiquadSection& s = cascade.sections[j];
            of_section({{s.b0, s.b1, s.b2}, {s.a1, s.a2}}, j, j + 1 == cascade.sections.size());
        }
    }

    void of_section(const Section& s, std::size_t j, bool is_last) {
        bool stays_wide = false;
        find_spare_of_state(s);
        if (stage_.structure == Structure::direct_2) {
            of_direct_2(s, j);
        } else if (stage_.structure == Structure::transposed_2) {
            of_transposed(s, j);
        } else {
            if (stage_.structure == Structure::direct_1) of_direct_1(s, j);
            if (stage_.structure == Structure::difference) of_difference(s.forward.front());
            if (stage_.structure == Structure::leak) of_leak(s.forward.front());
            stays_wide = stage_.rounding_at == RoundingAt::output && !is_last;
            if (!stays_wide) add_output(j);
        }
        in_ = stays_wide ? stage_.state : stage_.out.word;
        in_spare_ = stays_wide ? state_spare_ : 0;
        if (!stays_wide && stage_.structure != Structure::direct_2 && stage_.structure != Structure::transposed_2) {
            set_spare_out(stage_.state.fraction_bits - state_spare_);
        }
    }

    std::vector<Term> terms_of(const std::vector<double>& forward, const Word& word) const {
        std::vector<Term> terms;
        for (const double b : forward) terms.push_back(term(b, word));
        return terms;
    }

    void of_direct_1(const Section& s, std::size_t j) {
        SumTarget target = at_section("sum", j, Place::loop);
        target.saves_fraction = stage_.fraction_saving;
        target.fraction_bits = stage_.state.fraction_bits;
        std::vector<Term> terms = terms_of(s.forward, in_);
        for (const double a : s.feedback) terms.push_back(feedback(a, stage_.state));
        sums_.add_sum(std::move(terms), target);
    }

    void of_direct_2(const Section& s, std::size_t j) {
        const Word& state = stage_.state;
        SumTarget first = at_section("state", j, Place::entry);
        first.saves_fraction = stage_.fraction_saving;
        first.fraction_bits = state.fraction_bits;
        first.from_input = path_to_states(s, first.node);
        std::vector<Term> terms{whole(in_)};
        for (const double a : s.feedback) terms.push_back(feedback(a, state));
        sums_.add_sum(std::move(terms), first);
        SumTarget second = at_section("output", j, Place::behind);
        second.saves_fraction = stage_.fraction_saving;
        second.rounding = stage_.output_rounding;
        second.from_input_of_terms = first.from_input;
        second.multiplies_input = false;
        sums_.add_sum(terms_of(s.forward, state), second);
    }

    // What the states lose comes in at the summing point of y, a sample or more later.
    void of_transposed(const Section& s, std::size_t j) {
        sums_.add_sum({whole(stage_.state), term(s.forward.front(), in_)}, at_section("output", j, Place::loop));
        const std::size_t order = std::max(s.forward.size() - 1, s.feedback.size());
        for (std::size_t k = 1; k <= order; ++k) {
            SumTarget state = at_section("state " + std::to_string(k), j, Place::loop);
            state.fraction_bits = stage_.state.fraction_bits;
            std::vector<Term> terms;
            if (k < order) terms.push_back(whole(stage_.state));
            if (k < s.forward.size()) terms.push_back(term(s.forward[k], in_));
            if (k <= s.feedback.size()) terms.push_back(feedback(s.feedback[k - 1], stage_.out.word));
            sums_.add_sum(std::move(terms), state);
        }
    }

    FilterChain path_to_states(const Section& s, const FilterNode& node) const {
        if (family_of(stage_.stage) != Family::recursion) return path_to_state(exact_.stages, node);
        FilterChain path = exact_up_to(index_);
        std::vector<double> a{1.0};
        a.insert(a.end(), s.feedback.begin(), s.feedback.end());
        FilterStage loop;
        loop.design = Recursion{{1.0}, a};
        path.push_back(loop);
        return path;
    }

    void of_difference(double k) {
        const Word difference{wide_bits, std::max(in_.fraction_bits, stage_.state.fraction_bits)};
        SumTarget target = at_section("product", 0, Place::loop);
        target.fraction_bits = stage_.state.fraction_bits;
        target.multiplies_input = false;
        sums_.add_sum({term(k, difference)}, target);
    }

    void of_leak(double k) {
        SumTarget target = at_section("product of input", 0, Place::loop);
        target.fraction_bits = stage_.state.fraction_bits;
        sums_.add_product(term(k, in_), target, 1.0);
        target.what = "product of state";
        target.from_input_of_terms = target.from_input;
        target.multiplies_input = false;
        sums_.add_product(term(k, stage_.state), target, -1.0);
    }

    /// From state words to output words.
    void add_output(std::size_t j) {
        const int bits = stage_.state.fraction_bits - stage_.out.word.fraction_bits;
        if (bits <= 0) return;
        SumTarget target = at_section("output", j, Place::behind);
        target.rounding = stage_.output_rounding;
        sums_.add_shortening(
            target, {power_of_two(bits), -unlimited, unlimited, power_of_two(std::max(0, bits - state_spare_))});
    }

    /// Bits of a word's fraction that are always 0: a step that was never reached makes no remainder, and the mean of a
    /// rounding hangs on the remainders.
    int spare_of(const Word& word) const {
        if (&word == &in_ || &word == &stage_.in.word) return in_spare_;
        return &word == &stage_.state ? state_spare_ : 0;
    }

    Term whole(const Word& word) const { return {1.0, 1, word.fraction_bits, word, spare_of(word)}; }

    Term term(double coefficient, const Word& word) const {
        const int bits = stage_.coefficient_fraction_bits;
        const bool is_known = stage_.coefficients_are_said;
        return {coefficient, is_known ? static_cast<std::int64_t>(std::ldexp(coefficient, bits)) : 1,
                word.fraction_bits + bits, word, spare_of(word)};
    }

    /// Fraction bits that products of these coefficients and words of so many can have.
    int bits_of_products(const std::vector<double>& coefficients, int word_bits) const {
        const int f = stage_.coefficient_fraction_bits;
        if (!stage_.coefficients_are_said) return word_bits + f;
        int common = f;
        for (const double c : coefficients) {
            const auto stored = static_cast<std::uint64_t>(static_cast<std::int64_t>(std::ldexp(c, f)));
            if (stored != 0) common = std::min(common, std::countr_zero(stored));
        }
        return word_bits + f - common;
    }

    int in_bits() const { return in_.fraction_bits - in_spare_; }

    void find_spare_of_state(const Section& s) {
        const Word& state = stage_.state;
        int bits = state.fraction_bits;  // a leak has no accumulator
        if (stage_.structure != Structure::leak) bits = stage_.accumulator_fraction_bits.value_or(bits);
        if (stage_.structure == Structure::transposed_2) {
            bits = std::max(bits_of_products(s.forward, in_bits()),
                            bits_of_products(s.feedback, stage_.out.word.fraction_bits));
        }
        state_spare_ = std::max(0, state.fraction_bits - bits);
    }

    void set_spare_out(int bits) { in_spare_ = std::max(0, stage_.out.word.fraction_bits - bits); }

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
    Word in_ = {};                        ///< of the section at hand
    int in_spare_ = 0, state_spare_ = 0;  ///< spare_of
    SumPoints sums_;
};

}  // namespace

std::vector<RoundingPoint> rounding_points(const DescribedChain& chain, const ExactChain& exact) {
    std::vector<RoundingPoint> all;
    int spare = 0;
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        const bool is_float = chain.stages[i].number == NumberKind::float32;
        StagePoints stage(chain, exact, i, is_float ? 0 : spare);
        if (!is_float) {
            for (RoundingPoint& point : stage.find()) all.push_back(std::move(point));
        }
        spare = is_float ? 0 : stage.spare_out();
    }
    return all;
}

FilterChain path_of(const RoundingPoint& point, const FilterChain& chain) {
    FilterChain path;
    FilterStage factor{Fir{{1.0, -1.0}}, std::nullopt};
    if (point.saves_fraction) path.push_back(factor);
    if (const auto* recursion = std::get_if<Recursion>(&chain[point.node.stage].design);
        recursion != nullptr && point.place == RoundingPoint::Place::loop) {
        factor.design = Recursion{{1.0}, recursion->a};
        path.push_back(factor);
    }
    const FilterChain rest = point.place == RoundingPoint::Place::entry ? path_from_section(chain, point.node)
                                                                        : path_to_output(chain, point.node);
    path.insert(path.end(), rest.begin(), rest.end());
    return path;
}

}  // namespace halflsb
