#include "oracle/explain/arithmetic_changes.hpp"

#include <algorithm>

#include "oracle/arithmetic/described.hpp"
#include "oracle/arithmetic/plausible_changes.hpp"

namespace halflsb {
namespace {

/// By the name that plausible_changes gives it.
std::string where_to_look(std::string_view what) {
    const auto says = [what](std::string_view word) { return what.find(word) != std::string_view::npos; };
    if (says("accumulator")) return "the type of the accumulator";
    if (says("feedback before")) return "which value is kept for the feedback: before or after it is held";
    if (says("output that")) return "the conversion to the output's type";
    if (says("coefficients")) return "the conversion of the coefficients";
    if (says("product")) return "whether each product is shifted before it is added";
    if (says("fraction")) return "whether the remainder is kept for the next sum";
    if (says("fused")) return "the compiler's contraction of products and sums";
    if (says("words between")) return "the type of what one stage hands to the next";
    if (says("a state ")) return "the type in which the filter keeps its past";
    if (says("added first")) return "the order of the loop over the taps";
    if (says("in place of") && (says("direct") || says("transposed") || says("sum")))
        return "the structure of the section";
    return "the constant that is added before the shift, and the shift or division";
}

class ArithmeticChanges {
public:
    ArithmeticChanges(const Hypothesis& from, const Signal& signal) : from_(from), signal_(signal) {}

    std::vector<Hypothesis> all() {
        const FilterChain& filter = from_.board.filter;
        const auto described = describe(filter, signal_.input, signal_.output, signal_.output_per_input).described;
        if (!described) return {};
        for (const ArithmeticChange& each :
             plausible_changes(filter, signal_.input, signal_.output, signal_.output_per_input)) {
            add(each.stage, each.name, each.name.find("accumulator") != std::string::npos ? 5.0 : 4.0,
                [&](FilterStage& stage) { stage.arithmetic = each.arithmetic; });
        }
        for (std::size_t i = 0; i < filter.size(); ++i) {
            if (described->stages[i].number != NumberKind::integer) {
                conversion(i, described->stages[i]);
                continue;
            }
            products(i, described->stages[i]);
            upper_words(i, described->stages[i]);
            states(i, described->stages[i]);
            between(i, described->stages[i]);
            constants(i, described->stages[i]);
            widths(i, described->stages[i]);
        }
        return std::move(found_);
    }

private:
    template <class Alter>
    void add(std::size_t stage, std::string what, double price_bits, const Alter& alter) {
        Hypothesis made = from_;
        alter(made.board.filter[stage]);
        const std::string look_at = where_to_look(what);
        add_changed(from_, std::move(made), {Slot::arithmetic, stage, std::move(what), look_at, price_bits}, found_);
    }

    void products(std::size_t i, const DescribedStage& stage) {
        if (!has_word(stage.stage, "rounding_at")) return;
        for (const std::string_view name : rounding_names()) {
            const Rounding rounding = *rounding_from(name);
            if (rounding == stage.rounding) continue;  // plausible_changes has that
            add(i, "each product shortened by " + std::string(name) + " before it is added", 5.0,
                [&](FilterStage& changed) {
                    changed.arithmetic.rounding_at = RoundingAt::product;
                    changed.arithmetic.rounding = rounding;
                    changed.arithmetic.fraction_saving = false;
                });
        }
    }

    /// Kernels for 32-bit words that keep the upper word of each product.
    void upper_words(std::size_t i, const DescribedStage& stage) {
        constexpr int word_bits = 32;
        if (stage.out.word.bits != word_bits || !has_word(stage.stage, "accumulator_bits")) return;
        const int kept = stage.in.word.fraction_bits + stage.coefficient_fraction_bits - word_bits;
        if (kept < 0) return;
        for (const Rounding rounding : {stage.rounding, Rounding::floor}) {
            const bool is_floor = rounding == Rounding::floor;
            add(i,
                std::string("the upper 32 bits of each product, ") + (is_floor ? "cut off" : "rounded") +
                    ", summed in 32 bits",
                5.0, [&](FilterStage& changed) {
                    changed.arithmetic.accumulator_bits = word_bits;
                    changed.arithmetic.accumulator_fraction_bits = kept;
                    changed.arithmetic.accumulator_overflow = Overflow::wrap;
                    changed.arithmetic.rounding_at = RoundingAt::sum;
                    changed.arithmetic.rounding = rounding;
                    changed.arithmetic.fraction_saving = false;
                });
            if (is_floor) break;
        }
    }

    /// What is kept from sample to sample in fewer bits, or without a fraction.
    void states(std::size_t i, const DescribedStage& stage) {
        if (!has_word(stage.stage, "state_bits") || stage.stage.kind == "cic-decimator" ||
            stage.stage.kind == "cic-interpolator")
            return;
        for (const int bits : {16, 24, 32}) {
            if (bits >= stage.state.bits) continue;
            add(i, "a state of " + std::to_string(bits) + " bits", 5.5,
                [&](FilterStage& changed) { changed.arithmetic.state_bits = bits; });
        }
        const Word& out = stage.out.word;
        if (stage.state.bits == out.bits && stage.state.fraction_bits == out.fraction_bits) return;
        const auto as_out = [&](FilterStage& changed) {
            changed.arithmetic.state_bits = out.bits;
            changed.arithmetic.state_fraction_bits = out.fraction_bits;
        };
        add(i, "a state in the output's words", 5.0, as_out);
        if (stage.structure != Structure::leak) return;
        for (const Rounding rounding : {stage.rounding, Rounding::toward_zero, Rounding::half_up}) {
            add(i,
                "a state in the output's words, to which the difference is added, shortened by " +
                    std::string(name_of(rounding)),
                5.5, [&](FilterStage& changed) {
                    as_out(changed);
                    changed.arithmetic.structure = Structure::difference;
                    changed.arithmetic.rounding = rounding;
                });
        }
    }

    /// Words that a stage hands to the next one.
    void between(std::size_t i, const DescribedStage& stage) {
        if (i + 1 >= from_.board.filter.size()) return;
        const bool feeds_back = has_word(stage.stage, "state_bits");
        for (const char* const name : {"i16", "q15", "i24", "i32", "q31"}) {
            const auto format = sample_format(name);
            add(i, std::string(name) + " words between this stage and the next", 5.0, [&](FilterStage& changed) {
                changed.arithmetic.stage_format = *format;
                if (!feeds_back) return;
                // What is fed back stays as it was.
                changed.arithmetic.state_bits = stage.state.bits;
                changed.arithmetic.state_fraction_bits = stage.state.fraction_bits;
                changed.arithmetic.state_overflow = stage.state.overflow;
            });
            if (!feeds_back) continue;
            add(i, std::string(name) + " words between this stage and the next, and fed back", 5.5,
                [&](FilterStage& changed) { changed.arithmetic.stage_format = *format; });
        }
    }

    /// Of floats into the words that are sent: a cast cuts off, and holds nothing.
    void conversion(std::size_t i, const DescribedStage& stage) {
        if (i + 1 < from_.board.filter.size() || stage.out.is_float) return;
        for (const std::string_view name : rounding_names()) {
            const Rounding rounding = *rounding_from(name);
            for (const bool wraps : {false, true}) {
                std::string what = rounding == stage.rounding
                                       ? ""
                                       : std::string(name) + " in place of " + std::string(name_of(stage.rounding));
                if (wraps) what += what.empty() ? "an output that wraps" : ", into an output that wraps";
                if (what.empty()) continue;
                add(i, std::move(what), wraps ? 4.5 : 4.0, [&](FilterStage& changed) {
                    changed.arithmetic.rounding = rounding;
                    if (wraps) changed.arithmetic.output_overflow = Overflow::wrap;
                });
            }
        }
    }

    /// Beside those that a rounding has.
    void constants(std::size_t i, const DescribedStage& stage) {
        if (from_.board.sum != SumChange{} || stage.stage.kind == "median") return;
        const bool is_half_up = stage.rounding == Rounding::half_up;
        const auto constant = [&](int eighths, std::string what, double price_bits) {
            Hypothesis made = from_;
            made.board.sum = {i, eighths, 0};
            add_changed(
                from_, std::move(made),
                {Slot::arithmetic, i, std::move(what), "the constant that is added before the shift", price_bits},
                found_);
        };
        if (is_half_up) {
            constant(4, "the constant of the rounding twice as large, or added twice", 4.5);
            constant(-2, "the constant of the rounding half as large", 5.5);
        }
        constant(8, "one LSB of the result added before it is shortened", 6.0);
        constant(-8, "one LSB of the result taken off before it is shortened", 7.0);
    }

    void widths(std::size_t i, const DescribedStage& stage) {
        if (!has_word(stage.stage, "accumulator_bits")) return;
        for (const int bits : {8, 12, 16, 24, 32, 40}) {
            if (bits >= stage.accumulator_bits) continue;
            for (const Overflow overflow : {Overflow::wrap, Overflow::saturate}) {
                const bool is_usual = (bits == 16 || bits == 32) && overflow == stage.accumulator_overflow;
                if (is_usual) continue;  // plausible_changes has that
                add(i,
                    "an accumulator of " + std::to_string(bits) + " bits that " +
                        (overflow == Overflow::wrap ? "wraps" : "saturates"),
                    bits % 16 == 0 ? 6.0 : 8.0, [&](FilterStage& changed) {
                        changed.arithmetic.accumulator_bits = bits;
                        changed.arithmetic.accumulator_overflow = overflow;
                    });
            }
        }
    }

    const Hypothesis& from_;
    const Signal& signal_;
    std::vector<Hypothesis> found_;
};

}  // namespace

std::vector<Hypothesis> arithmetic_changes(const Hypothesis& from, const Signal& signal) {
    return ArithmeticChanges(from, signal).all();
}

}  // namespace halflsb
