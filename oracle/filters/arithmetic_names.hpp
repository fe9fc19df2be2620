// The words that stand for the values of each enumeration of an arithmetic, in its order. Private to this room.
#pragma once

#include <algorithm>
#include <optional>
#include <string_view>
#include <vector>

#include "oracle/filters/stage_arithmetic.hpp"

namespace halflsb {

using Words = std::vector<std::string_view>;

template <class Value>
Words words_of();
template <>
inline Words words_of<Overflow>() {
    return {"saturate", "wrap"};
}
template <>
inline Words words_of<NumberKind>() {
    return {"integer", "float32"};
}
template <>
inline Words words_of<Structure>() {
    return {"direct-1", "direct-2", "transposed-2", "running-sum", "fresh-sum", "difference", "leak"};
}
template <>
inline Words words_of<RoundingAt>() {
    return {"sum", "product", "output"};
}
template <>
inline Words words_of<Division>() {
    return {"divide", "shift", "reciprocal"};
}
template <>
inline Words words_of<Summation>() {
    return {"newest-first", "oldest-first"};
}
template <>
inline Words words_of<FeedbackCoefficients>() {
    return {"added", "subtracted"};
}

template <class Value>
std::string_view name_in_words(Value value) {
    return words_of<Value>().at(static_cast<std::size_t>(value));
}

template <class Value>
std::optional<Value> value_from(std::string_view word) {
    const Words words = words_of<Value>();
    const auto found = std::find(words.begin(), words.end(), word);
    return found == words.end() ? std::nullopt : std::optional(static_cast<Value>(found - words.begin()));
}

}  // namespace halflsb
