#include "oracle/explain/coefficient_changes.hpp"

#include <cmath>
#include <utility>

namespace halflsb {
namespace {

constexpr double usual_bits = 5.0;  ///< what everybody has done once

class CoefficientChanges {
public:
    explicit CoefficientChanges(const Hypothesis& from) : from_(from) {}

    std::vector<Hypothesis> all() {
        for (stage_ = 0; stage_ < from_.board.filter.size(); ++stage_) of_stage();
        return std::move(found_);
    }

private:
    const FilterStage& stage() const { return from_.board.filter[stage_]; }

    template <class Alter>
    void add(std::string what, std::string look_at, double price_bits, const Alter& alter) {
        Hypothesis made = from_;
        alter(made.board.filter[stage_]);
        add_changed(from_, std::move(made), {Slot::filter, stage_, std::move(what), std::move(look_at), price_bits},
                    found_);
    }

    static void scale(FilterDesign& design, double by, bool feedback_too) {
        const auto times = [by](std::vector<double>& list, std::size_t from = 0) {
            for (std::size_t k = from; k < list.size(); ++k) list[k] *= by;
        };
        if (auto* fir = std::get_if<Fir>(&design)) times(fir->taps);
        if (auto* fewer = std::get_if<FirDecimator>(&design)) times(fewer->taps);
        if (auto* more = std::get_if<FirInterpolator>(&design)) times(more->taps);
        if (auto* recursion = std::get_if<Recursion>(&design)) {
            times(recursion->b);
            if (feedback_too) times(recursion->a, 1);
        }
        if (auto* comb = std::get_if<Comb>(&design)) {
            comb->direct *= by;
            comb->forward *= by;
            if (feedback_too) comb->feedback *= by;
        }
        if (auto* cascade = std::get_if<BiquadCascade>(&design)) {
            for (BiquadSection& s : cascade->sections) {
                for (double* c : {&s.b0, &s.b1, &s.b2}) *c *= by;
                if (!feedback_too) continue;
                for (double* c : {&s.a1, &s.a2}) *c *= by;
            }
        }
    }

    bool has_feedback() const {
        return std::holds_alternative<BiquadCascade>(stage().design) ||
               std::holds_alternative<Recursion>(stage().design) || std::holds_alternative<Comb>(stage().design);
    }

    void of_stage() {
        const auto bits = stage().coefficient_fraction_bits;
        if (!bits) return;
        for (const int by : {1, -1}) {
            const int other = *bits + by;
            if (other < 0 || other > 62) continue;
            add("a shift of " + std::to_string(other) + " bits in place of " + std::to_string(*bits) +
                    " after the products",
                "the shift behind the accumulator and the factor that made the coefficients whole numbers", usual_bits,
                [=](FilterStage& changed) {
                    scale(changed.design, std::ldexp(1.0, -by), true);
                    set_coefficient_fraction_bits(changed, other);
                });
        }
        const double one = std::ldexp(1.0, *bits);
        for (const double less : {1.0, 0.5}) {
            add("coefficients times 2^" + std::to_string(*bits) + " - " + (less < 1.0 ? "1/2" : "1") +
                    ", not times 2^" + std::to_string(*bits),
                "the factor that made the coefficients whole numbers", usual_bits + 0.5,
                [=](FilterStage& changed) { scale(changed.design, (one - less) / one, true); });
        }
        if (has_feedback()) {
            for (const double by : {2.0, 0.5}) {
                add(std::string("b alone ") + (by > 1.0 ? "doubled" : "halved"), "the scale of b", usual_bits + 2.0,
                    [=](FilterStage& changed) { scale(changed.design, by, false); });
            }
        }
        for (const Rounding rounding : {Rounding::toward_zero, Rounding::floor, Rounding::half_up}) {
            if (rounding == stage().arithmetic.coefficient_rounding) continue;
            const std::string how = rounding == Rounding::toward_zero ? "cut off toward zero"
                                    : rounding == Rounding::floor     ? "cut off downward"
                                                                      : "rounded half up";
            add("coefficients " + how, "the conversion of the coefficients", usual_bits - 0.5,
                [=](FilterStage& changed) { changed.arithmetic.coefficient_rounding = rounding; });
        }
        for (int fewer = 1; fewer < *bits; ++fewer) {
            const bool is_usual = fewer % 8 >= 5 && fewer > 5;  // of words of 8, 16, 24, 32 bits that hold up to 4
            add("coefficients in steps of 2^-" + std::to_string(fewer), "the word length of the coefficients",
                usual_bits + (is_usual ? 2.0 : 4.0),
                [=](FilterStage& changed) { set_coefficient_fraction_bits(changed, fewer); });
        }
    }

    const Hypothesis& from_;
    std::size_t stage_ = 0;
    std::vector<Hypothesis> found_;
};

}  // namespace

void set_coefficient_fraction_bits(FilterStage& stage, int bits) {
    stage.coefficient_fraction_bits = bits;
    stage.arithmetic.coefficient_fraction_bits = bits;
}

std::vector<Hypothesis> coefficient_changes(const Hypothesis& from) { return CoefficientChanges(from).all(); }

}  // namespace halflsb
