// A sum of products: first as it is planned, then in as few bits as it needs.
//
// The plan knows how large any number on the way can get. Where that is below 2^61 the sum is computed in 64 bits,
// with the same codes; else in 128, which hold the product of any two words.
#pragma once

#include <cmath>
#include <cstdint>
#include <string>
#include <vector>

#include "oracle/arithmetic/word_register.hpp"

namespace halflsb {

struct PlannedTerm {
    std::int64_t coefficient = 0;  ///< as stored
    int fraction_bits = 0;         ///< of the product
    double largest_word = 0.0;     ///< the largest size of the word that it multiplies, a number
    bool subtracted = false;
};

struct SumPlan {
    std::string name;
    Word accumulator;
    Rounding product_rounding = Rounding::floor;
    Rounding sum_rounding = Rounding::floor;
    bool saves_fraction = false;
    int constant_eighths = 0;  ///< of the last place of the target, with which each sum begins
    Word target;               ///< that the sum is shortened to
    std::vector<PlannedTerm> terms;

    /// Of the numbers that the sum can come to, in fraction bits of the accumulator.
    double largest_sum() const;
    /// The largest of the numbers that must be computed: products, sums, and the sum in fraction bits of its target.
    /// What words of at most 64 bits overflow to is not among them.
    double largest() const;
    /// 64 bits are enough.
    bool is_narrow() const { return largest() < 0x1p61; }
    /// Not even 128 bits are.
    bool is_too_wide() const { return !(largest() <= 0x1p126); }
};

/// The largest size of the numbers of a word.
double largest_number(const Word& word);

/// One coefficient, ready to be multiplied.
template <class Sum>
class Factor {
public:
    Factor(const PlannedTerm& term, const SumPlan& sum)
        : times_(term.coefficient),
          shift_{sum.accumulator.fraction_bits - term.fraction_bits, sum.product_rounding, sum.accumulator.overflow},
          is_subtracted_(term.subtracted) {
        // What is only raised, or not shifted at all, is one multiplication.
        if (shift_.up < 0) return;
        const double raised =
            std::ldexp(std::fabs(static_cast<double>(term.coefficient)) * term.largest_word, shift_.up);
        if (!(raised < std::ldexp(1.0, bits_of<Sum> - 3))) return;
        times_ = static_cast<Sum>(static_cast<UnsignedOf<Sum>>(times_) << shift_.up);
        if (is_subtracted_) times_ = -times_;
        is_subtracted_ = false;
        shift_.up = 0;
    }

    bool is_plain() const { return shift_.up == 0 && !is_subtracted_; }
    Sum times() const { return times_; }
    Sum product(std::int64_t word) const {
        const Sum brought = shift_(static_cast<Sum>(times_ * word));
        return is_subtracted_ ? -brought : brought;
    }

private:
    Sum times_;
    Shift shift_;
    bool is_subtracted_;
};

template <class Sum>
class Accumulator {
public:
    explicit Accumulator(const SumPlan& plan)
        : held_(plan.name + "accumulator", plan.accumulator),
          to_target_{plan.target.fraction_bits - plan.accumulator.fraction_bits, plan.sum_rounding,
                     plan.target.overflow},
          saves_fraction_(plan.saves_fraction),
          constant_(eighths_of_a_step(plan.constant_eighths, -to_target_.up)) {}

    void reset() {
        held_.reset();
        rest_ = 0;
    }

    void start() { sum_ = rest_ + constant_; }
    void add(Sum term) { sum_ = held_.hold(sum_ + term); }

    /// The sum with the fraction bits of the target, before it overflows there.
    Sum shortened() {
        const Sum number = to_target_(sum_);
        if (saves_fraction_) rest_ = sum_ - number * (Sum{1} << -to_target_.up);
        return number;
    }

    bool saves_fraction() const { return saves_fraction_; }
    std::int64_t rest() const { return static_cast<std::int64_t>(rest_); }
    /// False: no shortening leaves that.
    bool set_rest(std::int64_t rest) {
        const Sum step = Sum{1} << -to_target_.up;
        rest_ = rest;
        return rest > -step && rest < step;
    }

    NodeReach reach() const { return held_.reach(); }

private:
    /// In numbers of the accumulator, which has `places` more than the target.
    static Sum eighths_of_a_step(int eighths, int places) {
        if (places < 0) return 0;
        return (static_cast<Sum>(eighths) * (Sum{1} << places)) / 8;
    }

    Register<Sum> held_;
    Shift to_target_;
    bool saves_fraction_;
    Sum constant_;
    Sum sum_ = 0, rest_ = 0;
};

}  // namespace halflsb
