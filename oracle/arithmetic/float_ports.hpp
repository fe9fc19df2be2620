// The ends of a float32 stage: words to float32 and back.
#pragma once

#include <bit>
#include <cmath>
#include <cstdint>
#include <string>
#include <utility>

#include "oracle/arithmetic/described.hpp"
#include "oracle/arithmetic/twin.hpp"

namespace halflsb {

/// A float32 as it passes between stages and lies in a state: its bits.
inline std::int64_t bits_of_float(float value) { return std::bit_cast<std::int32_t>(value); }
inline float float_of_bits(std::int64_t bits) { return std::bit_cast<float>(static_cast<std::int32_t>(bits)); }
/// Not every number of 64 bits is a float.
inline bool is_float_bits(std::int64_t bits) { return bits == static_cast<std::int32_t>(bits); }

class FloatInput {
public:
    explicit FloatInput(const Port& port) : is_float_(port.is_float), step_(is_float_ ? 1.0 : step_of(port.word)) {}

    float operator()(std::int64_t word) const {
        // A word of 32 bits times a power of two is exact in double: rounded once.
        return is_float_ ? float_of_bits(word) : static_cast<float>(static_cast<double>(word) * step_);
    }

private:
    bool is_float_;
    double step_;
};

class FloatOutput {
public:
    FloatOutput(const Port& port, Rounding rounding, std::string name);
    void reset();
    /// A whole number of the words, or the bits of the float32.
    std::int64_t operator()(float value);
    NodeReach reach() const;

private:
    Port port_;
    Rounding rounding_;
    std::string name_;
    double scale_;  ///< words in a value
    double lowest_ = 0.0, highest_ = 0.0;
    std::int64_t overflows_ = 0;
};

}  // namespace halflsb
