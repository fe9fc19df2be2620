// A whole number divided, as a stage of arithmetic does it: y = N / D rounded, with N = S times 2^up and, where the
// fraction is saved, what the last division left.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <optional>

#include "oracle/arithmetic/word_arithmetic.hpp"

namespace halflsb {

struct Division128 {
    std::int64_t times = 1;  ///< the stored reciprocal, of a division that multiplies
    std::int64_t divisor = 1;
    int up = 0;  ///< fraction bits that the quotient has more than the number; negative: fewer
    bool saves_fraction = false;
    Rounding rounding = Rounding::floor;
    double largest_number = 0.0;  ///< that shall be divided
};

class Quotient {
public:
    /// nullopt where numbers would need more than 125 bits.
    static std::optional<Quotient> of(const Division128& division) {
        const double number = std::ldexp(division.largest_number * std::fabs(static_cast<double>(division.times)),
                                         std::max(division.up, 0));
        const double divisor = std::ldexp(static_cast<double>(division.divisor), std::max(-division.up, 0));
        if (!(number < 0x1p125 && divisor < 0x1p125)) return std::nullopt;
        return Quotient(division);
    }

    Int128 operator()(Int128 sum) {
        const Int128 number = sum * times_ * (Int128{1} << up_) + rest_;
        // Where both are small the processor divides at once.
        constexpr Int128 small = Int128{1} << 61;
        const Int128 y =
            number < small && number > -small && divisor_ < small
                ? divided(static_cast<std::int64_t>(number), static_cast<std::int64_t>(divisor_), rounding_)
                : divided(number, divisor_, rounding_);
        if (saves_fraction_) rest_ = number - y * divisor_;
        return y;
    }

    void reset() { rest_ = 0; }
    bool saves_fraction() const { return saves_fraction_; }
    std::int64_t rest() const { return static_cast<std::int64_t>(rest_); }
    /// False: no division leaves that.
    bool set_rest(std::int64_t rest) {
        rest_ = rest;
        return rest_ > -divisor_ && rest_ < divisor_;
    }

private:
    // A power of two that is common to number and divisor is left out of both.
    explicit Quotient(const Division128& division)
        : times_(division.times),
          divisor_(Int128{division.divisor} << std::max(-division.up, 0)),
          up_(std::max(division.up, 0)),
          saves_fraction_(division.saves_fraction),
          rounding_(division.rounding) {}

    Int128 times_, divisor_;
    int up_;
    bool saves_fraction_;
    Rounding rounding_;
    Int128 rest_ = 0;
};

}  // namespace halflsb
