// What becomes of a code between the wire and the filter, or on its way back: a change of representation and nothing
// that remembers. One of the slots of a hypothesis.
#pragma once

#include <span>
#include <string>
#include <vector>

#include "stimuli/sample_format.hpp"

namespace halflsb {

enum class CodeMapKind {
    none,
    negated,            ///< the opposite value; of the lowest code the highest
    negated_wrapping,   ///< the opposite number in two's complement: the lowest code is its own
    complemented,       ///< each bit inverted: the opposite value less one step
    other_layout,       ///< the bytes are those of `layout`: another byte order or justification
    halves_swapped,     ///< the two 16-bit halves of a word of 32
    offset_kept,        ///< half the range is not subtracted, or is added once too often
    offset_missing,     ///< half the range is subtracted once too often
    top_bit_inverted,   ///< offset binary taken for two's complement, or the other way
    sign_lost,          ///< the sign bit is cleared: a negative number lies half the range below the top
    negative_is_top,    ///< a negative number is read as unsigned and held at the highest code
    negative_is_above,  ///< a negative number is read as unsigned in a wider word
    negative_is_zero,   ///< a negative number is discarded
    low_bits_cleared,   ///< the lowest `amount` bits are 0
    moved_up,           ///< times 2^amount, held at the ends
    moved_up_wrapping,  ///< times 2^amount, the upper bits lost
    moved_down,         ///< floor(x 2^-amount)
    clamped,            ///< held within the range of a word that is `amount` bits narrower
    lowest_raised,      ///< the lowest code becomes its neighbour
    raised,             ///< `amount` steps are added, held at the ends
};

struct CodeMap {
    CodeMapKind kind = CodeMapKind::none;
    int amount = 0;
    SampleFormat layout = {};  ///< of other_layout
    bool operator==(const CodeMap&) const = default;
};

/// In place. A code may leave the range of the format where the map says so: the filter gets it like that.
void apply(const CodeMap& map, const SampleFormat& format, std::span<Code> codes);
/// The same on the way out of the board: what the host reads of the words that result.
void apply_at_output(const CodeMap& map, const SampleFormat& format, std::span<Code> codes);

struct NamedCodeMap {
    CodeMap map;
    std::string what;  ///< "the bytes of each word in the opposite order"
    double price_bits = 0.0;
};
/// Every map that a format can have, none but `none` left out. Of f32: byte orders alone.
std::vector<NamedCodeMap> code_maps_of(const SampleFormat& format);

}  // namespace halflsb
