// docs/arithmetic.md once more, for tests: one sample at a time, whole numbers of 128 bits, and no overflow at all.
// Slow, and written without a look at the twins.
#pragma once

#include <vector>

#include "oracle/arithmetic/described.hpp"
#include "oracle/filters/coefficients.hpp"

namespace halflsb::testing {

__extension__ typedef __int128 Huge;

inline Huge power(int exponent) { return Huge{1} << exponent; }

inline Huge floor_of(Huge a, Huge b) { return a / b - (a % b != 0 && a < 0 ? 1 : 0); }

/// a / b, b > 0, rounded.
inline Huge quotient(Huge a, Huge b, Rounding rounding) {
    switch (rounding) {
        case Rounding::floor:
            return floor_of(a, b);
        case Rounding::toward_zero:
            return a / b;
        case Rounding::half_up:
            return floor_of(2 * a + b, 2 * b);
        case Rounding::half_away:
            return a < 0 ? -floor_of(-2 * a + b, 2 * b) : floor_of(2 * a + b, 2 * b);
        case Rounding::half_even:
            break;
    }
    const Huge below = floor_of(a, b), rest = 2 * (a - below * b);
    return rest > b || (rest == b && below % 2 != 0) ? below + 1 : below;
}

/// A number with so many fraction bits.
struct Fixed {
    Huge number = 0;
    int bits = 0;
    bool is_subtracted = false;  ///< in a sum, after it was shortened
};

inline Fixed shortened(Fixed from, int bits, Rounding rounding) {
    if (bits >= from.bits) return {from.number * power(bits - from.bits), bits};
    return {quotient(from.number, power(from.bits - bits), rounding), bits};
}

/// A sum of products on its way to words of `target` bits; `saved` keeps its remainder.
inline Fixed sum_of(const DescribedStage& stage, const std::vector<Fixed>& terms, int target, Rounding rounding,
                    Fixed* saved = nullptr) {
    int most = terms.front().bits;
    for (const Fixed& t : terms) most = std::max(most, t.bits);
    const int bits = accumulator_fraction_bits_of(stage, most, target);
    Fixed sum{0, bits};
    if (saved != nullptr) sum.number = saved->number;
    for (const Fixed& t : terms) {
        const Huge number = shortened(t, bits, stage.rounding).number;
        sum.number += t.is_subtracted ? -number : number;
    }
    const Fixed result = shortened(sum, target, rounding);
    if (saved != nullptr && bits > target) *saved = {sum.number - result.number * power(bits - target), bits};
    return result;
}

class PlainStage {
public:
    explicit PlainStage(const DescribedStage& stage) : s_(stage) {
        // Rounded once: what is stored of a multiple is that multiple. A one-pole stores k, its pole is 1 - k.
        s_.stage = with_rounded_coefficients(s_.stage);
        if (const auto* cascade = std::get_if<BiquadCascade>(&s_.stage.design)) parts_.resize(cascade->sections.size());
        if (parts_.empty()) parts_.resize(1);
    }

    Fixed step(Fixed x) {
        x_.insert(x_.begin(), x);
        if (const auto* fir = std::get_if<Fir>(&s_.stage.design)) return of_fir(*fir);
        if (const auto* average = std::get_if<MovingAverage>(&s_.stage.design)) return of_average(average->points);
        if (const auto* comb = std::get_if<Comb>(&s_.stage.design)) return of_comb(*comb);
        const auto& sections = std::get<BiquadCascade>(s_.stage.design).sections;
        for (std::size_t j = 0; j < sections.size(); ++j)
            x = of_section(sections[j], parts_[j], x, j + 1 == parts_.size());
        return x;
    }

private:
    struct Part {
        std::vector<Fixed> x = std::vector<Fixed>(3), y = std::vector<Fixed>(3);
        Fixed saved = {}, saved_out = {};
    };

    Fixed times(double c, Fixed word) const {
        return {stored_coefficient(s_, c) * word.number, s_.coefficient_fraction_bits + word.bits};
    }
    Fixed back(double a, Fixed word) const {
        if (s_.feedback_coefficients == FeedbackCoefficients::added) return times(-a, word);
        const Fixed product = times(a, word);
        return {product.number, product.bits, true};
    }
    int out_bits() const { return s_.out.word.fraction_bits; }
    int state_bits() const { return s_.state.fraction_bits; }
    Fixed* saved(Fixed& place) const { return s_.fraction_saving ? &place : nullptr; }

    Fixed of_fir(const Fir& fir) {
        std::vector<Fixed> terms;
        for (std::size_t k = 0; k < fir.taps.size(); ++k)
            terms.push_back(times(fir.taps[k], k < x_.size() ? x_[k] : Fixed{0, s_.in.word.fraction_bits}));
        return sum_of(s_, terms, out_bits(), s_.rounding, saved(parts_[0].saved));
    }

    Fixed of_average(int points) {
        Huge sum = 0;
        for (std::size_t k = 0; k < x_.size() && k < static_cast<std::size_t>(points); ++k) sum += x_[k].number;
        Huge den = points;
        int gained = out_bits() - s_.in.word.fraction_bits;
        if (s_.division == Division::reciprocal) {
            sum *= stored_coefficient(s_, 1.0 / points);
            den = power(s_.coefficient_fraction_bits);
        }
        if (gained < 0) den *= power(-gained), gained = 0;
        const Huge num = sum * power(gained) + (s_.fraction_saving ? rest_ : 0);
        const Huge y = quotient(num, den, s_.rounding);
        rest_ = num - y * den;
        return {y, out_bits()};
    }

    Fixed of_comb(const Comb& c) {
        const auto delay = static_cast<std::size_t>(c.delay_samples);
        const Fixed far = delay < x_.size() ? x_[delay] : Fixed{0, x_[0].bits};
        const Fixed old = delay <= y_.size() ? y_[delay - 1] : Fixed{0, state_bits()};
        const Fixed s = sum_of(s_, {times(c.direct, x_[0]), times(c.forward, far), back(c.feedback, old)}, state_bits(),
                               s_.rounding, saved(parts_[0].saved));
        y_.insert(y_.begin(), s);
        return shortened(s, out_bits(), s_.output_rounding);
    }

    Fixed of_section(const BiquadSection& c, Part& p, Fixed x, bool is_last) {
        p.x = {x, p.x[0], p.x[1]};
        switch (s_.structure) {
            case Structure::difference: {
                const Fixed old{p.y[0].number, state_bits()};
                const int bits = std::max(x.bits, state_bits());
                const Fixed gap{
                    shortened(x, bits, Rounding::floor).number - shortened(old, bits, Rounding::floor).number, bits};
                p.y[0] = {old.number + shortened(times(c.b0, gap), state_bits(), s_.rounding).number, state_bits()};
                return shortened(p.y[0], out_bits(), s_.output_rounding);
            }
            case Structure::leak: {
                const Fixed old{p.y[0].number, state_bits()};
                p.y[0] = {old.number + shortened(times(c.b0, x), state_bits(), s_.rounding).number -
                              shortened(times(c.b0, old), state_bits(), s_.rounding).number,
                          state_bits()};
                return shortened(p.y[0], out_bits(), s_.output_rounding);
            }
            case Structure::direct_2: {
                const Fixed w = sum_of(s_, {x, back(c.a1, with(p.y[0])), back(c.a2, with(p.y[1]))}, state_bits(),
                                       s_.rounding, saved(p.saved));
                p.y = {w, with(p.y[0]), with(p.y[1])};
                return sum_of(s_, {times(c.b0, p.y[0]), times(c.b1, p.y[1]), times(c.b2, p.y[2])}, out_bits(),
                              s_.output_rounding, saved(p.saved_out));
            }
            case Structure::transposed_2: {
                const Fixed y = sum_of(s_, {with(p.y[0]), times(c.b0, x)}, out_bits(), s_.rounding);
                p.y[0] = sum_of(s_, {with(p.y[1]), times(c.b1, x), back(c.a1, y)}, state_bits(), s_.rounding);
                p.y[1] = sum_of(s_, {times(c.b2, x), back(c.a2, y)}, state_bits(), s_.rounding);
                return y;
            }
            default:
                break;
        }
        for (std::size_t k = 1; k < 3; ++k) p.x[k].bits = x.bits;
        const Fixed s = sum_of(s_,
                               {times(c.b0, x), times(c.b1, p.x[1]), times(c.b2, p.x[2]), back(c.a1, with(p.y[0])),
                                back(c.a2, with(p.y[1]))},
                               state_bits(), s_.rounding, saved(p.saved));
        p.y = {s, with(p.y[0]), with(p.y[1])};
        if (s_.rounding_at == RoundingAt::output && !is_last) return s;
        return shortened(s, out_bits(), s_.output_rounding);
    }

    Fixed with(Fixed state) const { return {state.number, state_bits()}; }

    DescribedStage s_;
    std::vector<Fixed> x_, y_;  ///< newest first
    std::vector<Part> parts_;
    Huge rest_ = 0;
};

/// Values of the response to input words, whatever their size.
inline std::vector<double> plain_response(const DescribedChain& chain, const std::vector<Code>& codes) {
    std::vector<PlainStage> stages(chain.stages.begin(), chain.stages.end());
    std::vector<double> response;
    for (const Code code : codes) {
        Fixed word{code, chain.stages.front().in.word.fraction_bits};
        for (PlainStage& stage : stages) word = stage.step(word);
        response.push_back(std::ldexp(static_cast<double>(word.number), -word.bits));
    }
    return response;
}

}  // namespace halflsb::testing
