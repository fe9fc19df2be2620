// What the elements of a C array are, and what becomes of a constant that is stored in one. Private to this room.
//
// C decides by the type of the array: in an int16_t the constant 0xFFFF is -1, in a uint16_t 65535; a double constant
// in a float array is rounded to float. What depends on the processor (char, the width of int and long) is refused
// where it makes a difference.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "oracle/filters/c_tokens.hpp"

namespace halflsb {

struct CType {
    enum class Kind {
        integer,
        real32,
        real64,
        unknown,  ///< a struct, or a type of another file: constants are taken as they are written
        unusable  ///< a pointer, a type that no table of coefficients has
    };
    Kind kind = Kind::unknown;
    std::string name = {};
    bool is_signed = true;
    bool is_char = false;  ///< plain char: signed on one processor, unsigned on another
    /// The width; int and long have two, on small and on large processors. An unknown one has 0 bits.
    int bits = 0, least_bits = 0;
};

/// From the words in front of an array's name. Type definitions of the same file are followed.
CType c_type_of(const std::vector<CToken>& words, const CSource& source);
/// Of a name that can stand in a cast; nullopt: it names no type that is known here.
std::optional<CType> c_type_named(std::string_view name, const CSource& source);
/// Whether a word can only belong to a type: "unsigned".
bool is_c_type_word(std::string_view word);

/// A constant, with what C remembers of how it was written.
struct CValue {
    bool is_real = false;
    double real = 0.0;            ///< also of an integer up to 2^53
    bool is_real32 = false;       ///< with the suffix f, or cast to float
    bool is_negative = false;     ///< of an integer
    std::uint64_t magnitude = 0;  ///< of an integer
    bool is_bits = false;         ///< hexadecimal, octal or binary: it may mean the bits of a negative number
    bool is_unsigned = false;     ///< with the suffix u, or too large for its signed type
};

/// A problem and a remedy, without a place.
struct CComplaint {
    std::string problem, remedy;
};

/// The constant of a preprocessing number: 16384, 0x4000u, 040000, 0b1, 0.5f, 1e-3, 0x1.8p-2.
std::variant<CValue, CComplaint> c_constant(std::string_view text);

/// What an element of that type holds after it was initialised with the value. `written` is for the message.
std::variant<double, CComplaint> stored_in(const CType& type, const CValue& value, std::string_view written);

}  // namespace halflsb
