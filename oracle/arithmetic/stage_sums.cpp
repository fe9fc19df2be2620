#include "oracle/arithmetic/stage_sums.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <limits>

#include "oracle/arithmetic/family.hpp"

namespace halflsb {

namespace {

constexpr int no_bits = -1000, any_bits = 1000;  // of a fraction: of nothing but zeros, and without an end

}  // namespace

StageSums::StageSums(const DescribedChain& chain, const ExactChain& exact_chain, std::size_t stage_index,
                     const UsedBits& used)
    : stage(chain.stages[stage_index]),
      exact(exact_chain),
      index(stage_index),
      in(stage.in.word),
      in_spare(used.spare),
      in_may_lean(used.may_lean_to_even),
      sums(stage, stage_index) {
    sums.coarsest_step = std::max(used.coarsest_step, std::ldexp(1.0, -in_bits()));
}

int StageSums::spare_of(const Word& word) const {
    if (&word == &in || &word == &stage.in.word) return in_spare;
    if (&word == &stage.out.word) return std::max(0, word.fraction_bits - result_bits);
    return &word == &stage.state ? state_spare : 0;
}

bool StageSums::may_lean() const {
    return in_may_lean || (stage.rounding_is_said &&
                           (stage.rounding == Rounding::half_even || stage.output_rounding == Rounding::half_even));
}

bool StageSums::leans(const Word& word) const {
    return &word == &in || &word == &stage.in.word ? in_may_lean : may_lean();
}

Term StageSums::whole(const Word& word) const {
    Term term{1.0, 1, word.fraction_bits, word, spare_of(word)};
    if (&word == &stage.state) term.of = Term::Of::state;
    term.may_lean_to_even = leans(word);
    return term;
}

Term StageSums::term(double coefficient, const Word& word) const {
    const int bits = stage.coefficient_fraction_bits;
    const bool is_known = stage.coefficients_are_said;
    Term product{coefficient, is_known ? static_cast<std::int64_t>(std::ldexp(coefficient, bits)) : 1,
                 word.fraction_bits + bits, word, spare_of(word)};
    product.may_lean_to_even = leans(word);
    return product;
}

Term StageSums::feedback(double a, const Word& word) const {
    const bool is_subtracted = stage.feedback_coefficients == FeedbackCoefficients::subtracted;
    Term product = term(is_subtracted ? a : -a, word);
    product.of = Term::Of::feedback;
    product.is_subtracted = is_subtracted;
    return product;
}

int StageSums::bits_of_products(const std::vector<double>& coefficients, int word_bits) const {
    int most = no_bits;
    if (word_bits <= no_bits) return most;
    for (const double c : coefficients) {
        if (c == 0.0) continue;
        if (!stage.coefficients_are_said) {
            most = std::max(most, word_bits + fraction_bits_of(c));
            continue;
        }
        const int f = stage.coefficient_fraction_bits;
        const auto stored = static_cast<std::uint64_t>(static_cast<std::int64_t>(std::ldexp(c, f)));
        if (stored != 0) most = std::max(most, word_bits + f - std::countr_zero(stored));
    }
    return most;
}

// Bits come in with the input, and a feedback adds some each time round, until the words or the accumulator end them.
void StageSums::find_spare_of_state(const std::vector<double>& forward, const std::vector<double>& fed_back) {
    const Word& state = stage.state;
    const int input = in_bits(), accumulator = stage.accumulator_fraction_bits.value_or(any_bits);
    const auto kept = [&](const Word& word, int bits) { return std::min({word.fraction_bits, accumulator, bits}); };
    int bits = no_bits;
    result_bits = no_bits;
    for (int before = any_bits; before != bits + result_bits;) {
        before = bits + result_bits;
        if (stage.structure == Structure::transposed_2) {
            const std::vector<double> first(forward.begin(), forward.begin() + 1),
                others(forward.begin() + 1, forward.end());
            bits = kept(state, std::max(bits_of_products(others, input), bits_of_products(fed_back, result_bits)));
            result_bits = kept(stage.out.word, std::max(bits, bits_of_products(first, input)));
        } else if (stage.structure == Structure::direct_2) {
            bits = kept(state, std::max(input, bits_of_products(fed_back, bits)));
            result_bits = kept(stage.out.word, bits_of_products(forward, bits));
        } else if (stage.structure == Structure::difference) {
            bits = std::max(bits, kept(state, bits_of_products(forward, std::max(input, bits))));
        } else if (stage.structure == Structure::leak) {
            // Each product by itself, without an accumulator.
            bits = std::max(bits, std::min(state.fraction_bits, bits_of_products(forward, std::max(input, bits))));
        } else {
            bits = kept(state, std::max(bits_of_products(forward, input), bits_of_products(fed_back, bits)));
        }
        if (stage.structure != Structure::transposed_2 && stage.structure != Structure::direct_2)
            result_bits = std::min(stage.out.word.fraction_bits, bits);
    }
    state_spare = std::max(0, state.fraction_bits - bits);
    for (const int used : {input, bits}) sums.coarsest_step = std::max(sums.coarsest_step, std::ldexp(1.0, -used));
}

void StageSums::set_spare_out(int bits) { in_spare = std::max(0, stage.out.word.fraction_bits - bits); }

void StageSums::add_output(std::size_t section) {
    const int bits = stage.state.fraction_bits - stage.out.word.fraction_bits;
    if (bits <= 0) return;
    constexpr double unlimited = std::numeric_limits<double>::infinity();
    SumTarget target = at_section("output", section, RoundingPoint::Place::behind);
    target.rounding = stage.output_rounding;
    sums.add_shortening(target, {std::ldexp(1.0, bits), -unlimited, unlimited,
                                 std::ldexp(1.0, std::max(0, bits - state_spare)), may_lean()});
}

FilterChain StageSums::exact_up_to(std::size_t stage_end) const {
    const auto first = exact.stages.begin();
    return FilterChain(first, first + static_cast<std::ptrdiff_t>(exact.first_of[stage_end]));
}

SumTarget StageSums::behind(std::string what) const {
    SumTarget target;
    target.what = std::move(what);
    target.node.stage = exact.first_of[index + 1] - 1;
    target.fraction_bits = stage.out.word.fraction_bits;
    target.rounding = stage.rounding;
    target.from_input = exact_up_to(index + 1);
    target.from_input_of_terms = exact_up_to(index);
    return target;
}

SumTarget StageSums::at_section(std::string what, std::size_t section, RoundingPoint::Place place) const {
    SumTarget target = behind(std::move(what));
    if (family_of(stage.stage) == Family::sections) {
        target.what = "section " + std::to_string(section + 1) + ", " + target.what;
    }
    target.place = place;
    target.node = {exact.first_of[index], section, false};
    target.from_input = target.from_input_of_feedback = path_from_input(exact.stages, target.node);
    if (section > 0) target.from_input_of_terms = path_from_input(exact.stages, {target.node.stage, section - 1});
    return target;
}

}  // namespace halflsb
