#include "oracle/arithmetic/sum_points.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <limits>

namespace halflsb {

namespace {

constexpr double unlimited = std::numeric_limits<double>::infinity();

bool any_leans_to_even(const std::vector<Term>& terms) {
    return std::any_of(terms.begin(), terms.end(), [](const Term& t) { return t.may_lean_to_even; });
}

/// Numbers of which nothing says how finely the firmware stores their coefficients. Taken as they are designed, they
/// are multiples of a fraction all the same: 1/4 for a mean of four, practically none for most filters.
RoundedNumbers designed_numbers(const std::vector<Term>& terms, int target_bits) {
    int most = 0;
    for (const Term& t : terms) {
        const int of_word = t.word.fraction_bits - t.spare_bits;
        most = std::max(most, fraction_bits_of(t.coefficient) + of_word - target_bits);
    }
    return {unlimited, -unlimited, unlimited, std::ldexp(1.0, std::min(most, 1000)), any_leans_to_even(terms)};
}

int trailing_zeros(std::int64_t stored) { return std::countr_zero(static_cast<std::uint64_t>(stored)); }

/// The number at the end of the path times `part`, less what it was a sample before.
FilterChain moved(FilterChain path, double part) {
    FilterStage difference;
    difference.design = Fir{{part, -part}};
    path.push_back(std::move(difference));
    return path;
}

double power_of_two(int exponent) { return std::ldexp(1.0, exponent); }

}  // namespace

int fraction_bits_of(double c) {
    int exponent = 0;
    const auto mantissa = static_cast<std::int64_t>(std::ldexp(std::frexp(c, &exponent), 53));
    return 53 - exponent - std::countr_zero(static_cast<std::uint64_t>(mantissa));
}

double moving_part(double coefficient, const Word& word, int step_bits) {
    const double whole = std::ldexp(1.0, word.fraction_bits - step_bits);
    return coefficient - whole * std::round(coefficient / whole);
}

std::optional<Rounding> SumPoints::rounding_of(const SumTarget& target) const {
    return stage_.rounding_is_said ? std::optional(target.rounding) : std::nullopt;
}

RoundingPoint SumPoints::point_at(const SumTarget& target) const {
    RoundingPoint point;
    point.name = "stage " + std::to_string(index_ + 1) + ", " + target.what;
    point.stage = index_;
    point.node = target.node;
    point.node.in_feedback = target.place == RoundingPoint::Place::loop;
    point.place = target.place;
    point.step = power_of_two(-target.fraction_bits);
    point.coarsest_step = coarsest_step;
    point.from_input = target.from_input;
    return point;
}

void SumPoints::add_shortening(const SumTarget& target, RoundedNumbers numbers) {
    // What is not known may drop anything, even where the words as they are described drop nothing.
    if (stage_.rounding_is_said && numbers.parts <= 1.0) return;
    RoundingPoint point = point_at(target);
    numbers.carries = target.saves_fraction;
    point.parts = stage_.rounding_is_said ? numbers.parts : unlimited;
    point.error = rounding_error(rounding_of(target), numbers).times(point.step);
    point.variance_each = point.error.variance;
    point.saves_fraction = target.saves_fraction;
    point.remainder = target.remainder;
    points.push_back(std::move(point));
}

void SumPoints::add_product(const Term& product, const SumTarget& target, double sign) {
    const RoundedNumbers numbers = numbers_of({product}, product.fraction_bits, target.fraction_bits);
    if (is_known() && (product.stored == 0 || numbers.parts <= 1.0)) return;
    RoundingPoint point = point_at(target);
    point.parts = numbers.parts;
    point.error = rounding_error(rounding_of(target), numbers).times(sign * point.step);
    point.variance_each = point.error.variance;
    point.from_input = target.from_input_of_terms;
    point.factor = std::fabs(product.coefficient);
    point.is_of_input = target.multiplies_input;
    point.remainder = moved(point.from_input, moving_part(product.coefficient, product.word, target.fraction_bits));
    points.push_back(std::move(point));
}

void SumPoints::add_sum(std::vector<Term> terms, const SumTarget& target) {
    std::erase_if(terms, [](const Term& t) { return t.stored == 0 || t.coefficient == 0.0; });
    if (terms.empty()) return;
    int most = terms.front().fraction_bits;
    for (const Term& t : terms) most = std::max(most, t.fraction_bits);
    const int accumulator = accumulator_fraction_bits_of(stage_, most, target.fraction_bits);
    for (const Term::Of of : {Term::Of::input, Term::Of::state, Term::Of::feedback})
        add_products(terms, target, accumulator, of);
    if (!is_known()) {
        if (stage_.rounding_at != RoundingAt::product)
            add_shortening(target, designed_numbers(terms, target.fraction_bits));
        return;
    }
    RoundedNumbers numbers = numbers_of(terms, accumulator, target.fraction_bits);
    if (target.saves_fraction) numbers.lowest = -unlimited, numbers.highest = unlimited;
    add_shortening(target, numbers);
}

// Forward products, the state that is added and the products of feedback are points of their own: the errors of one
// word by several coefficients go together, and of silence only the first lose nothing.
void SumPoints::add_products(const std::vector<Term>& terms, const SumTarget& target, int accumulator, Term::Of of) {
    SumTarget products = target;
    products.rounding = stage_.rounding;  // whatever the rounding of the sum is
    products.what += of == Term::Of::feedback ? ", products of feedback"
                     : of == Term::Of::state  ? ", state"
                                              : ", products";
    products.fraction_bits = accumulator;
    RoundingPoint point = point_at(products);
    point.count = 0;
    point.factor = unlimited;
    point.is_of_input = of == Term::Of::input && target.multiplies_input;
    point.from_input = of == Term::Of::feedback ? target.from_input_of_feedback
                       : of == Term::Of::state  ? target.from_input_of_state
                                                : target.from_input_of_terms;
    const bool any = stage_.rounding_at == RoundingAt::product && !is_known();
    double moving = unlimited;
    for (const Term& t : terms) {
        if (t.of != of || (!any && !stage_.coefficients_are_said)) continue;
        Term product = t;
        product.is_subtracted = false;
        const RoundedNumbers numbers =
            any ? designed_numbers({product}, accumulator) : numbers_of({product}, t.fraction_bits, accumulator);
        if (numbers.parts <= 1.0) continue;
        const double step = t.is_subtracted ? -point.step : point.step;
        const RoundingError error = rounding_error(rounding_of(products), numbers).times(step);
        ++point.count;
        point.error = point.error + error;
        point.parts = std::max(point.parts, numbers.parts);
        point.variance_each = std::max(point.variance_each, error.variance);
        point.factor = std::min(point.factor, std::fabs(t.coefficient));
        moving = std::min(moving, std::fabs(moving_part(t.coefficient, t.word, accumulator)));
    }
    if (of == Term::Of::feedback && point.count > 0) point.remainder = moved(point.from_input, moving);
    if (point.count > 0) points.push_back(std::move(point));
}

// Of a sum in an accumulator, in steps of the words that it goes to. Its remainders are multiples of the smallest power
// of two that a term has; its range is that of its terms at the ends of their words.
RoundedNumbers SumPoints::numbers_of(const std::vector<Term>& terms, int accumulator, int target_bits) const {
    if (!stage_.coefficients_are_said) return designed_numbers(terms, target_bits);
    int common = 64, usual = 128;
    double low = 0.0, high = 0.0;
    for (const Term& t : terms) {
        const int gained = accumulator - t.fraction_bits;
        const int zeros = trailing_zeros(t.stored) + gained;
        common = std::min(common, std::max(0, zeros));
        usual = std::min(usual, std::max(0, zeros + t.spare_bits));
        const double stored = static_cast<double>(t.stored);
        const double scale = std::ldexp(t.is_subtracted ? -stored : stored, target_bits - t.fraction_bits);
        const double lowest = -power_of_two(t.word.bits - 1), highest = power_of_two(t.word.bits - 1) - 1.0;
        low += std::min(lowest * scale, highest * scale);
        high += std::max(lowest * scale, highest * scale);
        // A product that was shortened before can lie a step of the accumulator beyond its range.
        if (gained < 0) low -= power_of_two(target_bits - accumulator), high += power_of_two(target_bits - accumulator);
    }
    const int dropped = accumulator - target_bits;
    return {power_of_two(std::max(0, dropped - common)), low, high, power_of_two(std::max(0, dropped - usual)),
            any_leans_to_even(terms)};
}

}  // namespace halflsb
