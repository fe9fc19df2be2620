// A word of the firmware: what goes into it overflows at its ends, and the largest numbers that came are kept.
#pragma once

#include <algorithm>
#include <cmath>
#include <string>
#include <utility>

#include "oracle/arithmetic/twin.hpp"
#include "oracle/arithmetic/word_arithmetic.hpp"

namespace halflsb {

template <class Sum>
class Register {
public:
    Register(std::string name, const Word& word)
        : bits_(std::min(word.bits, bits_of<Sum>)),
          ceiling_(2 * ((Sum{1} << (bits_ - 2)) - 1) + 1),
          floor_(-ceiling_ - 1),
          word_(word),
          name_(std::move(name)) {}

    void reset() {
        lowest_ = highest_ = low_ = 0;
        span_ = 0;
        overflows_ = 0;
    }

    /// The number as the word holds it.
    Sum hold(Sum number) {
        // What lies between the ends and is no news passes by one comparison.
        if (static_cast<Unsigned>(number) - static_cast<Unsigned>(low_) <= span_) [[likely]]
            return number;
        return settle(number);
    }

    bool holds(Sum number) const { return number >= floor_ && number <= ceiling_; }

    NodeReach reach() const { return {name_, word_, value_of(lowest_), value_of(highest_), overflows_}; }

private:
    using Unsigned = UnsignedOf<Sum>;

    double value_of(Sum number) const { return std::ldexp(static_cast<double>(number), -word_.fraction_bits); }

    // Rare: kept out of the loops.
    [[gnu::noinline]] Sum settle(Sum number) {
        lowest_ = std::min(lowest_, number);
        highest_ = std::max(highest_, number);
        low_ = std::max(lowest_, floor_);
        span_ = static_cast<Unsigned>(std::min(highest_, ceiling_)) - static_cast<Unsigned>(low_);
        if (number >= floor_ && number <= ceiling_) return number;
        ++overflows_;
        if (word_.overflow == Overflow::saturate) return number < 0 ? floor_ : ceiling_;
        const int above = bits_of<Sum> - bits_;
        return static_cast<Sum>(static_cast<Unsigned>(number) << above) >> above;
    }

    int bits_;  ///< a word of more than a Sum has never overflows
    Sum ceiling_, floor_;
    Sum lowest_ = 0, highest_ = 0;  ///< since the reset, before the overflow
    Sum low_ = 0;                   ///< the same, held: numbers from low_ to low_ + span_ pass
    Unsigned span_ = 0;
    std::int64_t overflows_ = 0;
    Word word_;
    std::string name_;
};

}  // namespace halflsb
