// What the checks of twins against firmware share: its words and saturation, a low-pass in Q14, and the place where two
// records part.
#pragma once

#include <cstdint>
#include <initializer_list>
#include <string>

#include "tests/oracle/arithmetic/twin_support.hpp"

namespace halflsb::testing {

using Word16 = std::int16_t;
using Word32 = std::int32_t;
using Word64 = std::int64_t;

inline Word16 sat16(Word64 v) { return static_cast<Word16>(v > 32767 ? 32767 : v < -32768 ? -32768 : v); }

template <class Step>
Codes firmware(const Codes& in, Step step) {
    Codes out;
    for (const Code code : in) out.push_back(step(code));
    return out;
}

/// Where two records part, in words; nothing where they do not.
inline std::string difference(const Codes& twin, const Codes& board) {
    if (twin.size() != board.size()) return "lengths";
    for (std::size_t i = 0; i < twin.size(); ++i) {
        if (twin[i] == board[i]) continue;
        return "sample " + std::to_string(i) + ": twin " + std::to_string(twin[i]) + ", board " +
               std::to_string(board[i]);
    }
    return "";
}

inline Given word(const char* name, const char* value) { return {name, std::string(value)}; }
inline Given number(const char* name, int value) { return {name, whole(value)}; }

// A low-pass at 0.02 of the rate, Q 0.7: S = 14 and feedback that sums to almost one.
constexpr double q14 = 1.0 / 16384.0;
constexpr int b0 = 59, b1 = 118, b2 = 59, a1 = 29867, a2 = -13719;
inline const FiveNumbers low_pass{b0 * q14, b1* q14, b2* q14, -a1* q14, -a2* q14};

inline FilterStage biquad(std::initializer_list<Given> promised) { return biquads({low_pass}, promised); }

}  // namespace halflsb::testing
