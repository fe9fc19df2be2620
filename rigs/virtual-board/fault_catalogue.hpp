// Every fault that the virtual board can show, by name.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "rigs/virtual-board/clean_filters.hpp"
#include "rigs/virtual-board/line_faults.hpp"
#include "rigs/virtual-board/passage_faults.hpp"

namespace halflsb::board {

/// Of filters of two channels.
struct ChannelFaults {
    bool crosstalk = false;     ///< S16: a 128th of channel 1's input is in channel 2's output
    bool swapped = false;       ///< S16: each channel gets the other's samples
    bool shared_state = false;  ///< S15: both channels pass the filter of channel 1
    bool any() const { return crosstalk || swapped || shared_state; }
};

/// All faults of one board together.
struct Faults {
    TableFaults tables;
    Deviation deviation;
    std::vector<PassageFault> passage;
    ChannelFaults channels;
    bool wrong_justification = false;  ///< output words are left-justified instead of right, or the other way
    bool settings_ignored = false;
    LineFaults line;
    std::vector<std::string> names;  ///< as given
};

/// Which filters a fault can be seen in.
enum class Shows {
    any_filter,
    steady_rate,
    whole_numbers,
    line,
    fixed_average,
    tie,
    sum_or_product,
    product,
    quantised_table,
    biquad,
    feedback,
    asymmetric_fir,
    offset_binary,
    spare_bits,
    several_bytes,
    two_channels,
    two_like_channels,
    setting
};
bool shows_in(Shows shows, const FilterParts& filter);

struct FaultEntry {
    std::string_view id, alias;  ///< alias "" when there is none
    std::string_view argument;   ///< "", "N" or "N:MS"
    std::string_view what;
    Shows shows;
    void (*put)(Faults& faults, std::uint64_t n, std::uint32_t ms);
};
const std::vector<FaultEntry>& fault_catalogue();

/// Adds the fault that `text` ("A01", "truncation", "flip-byte=1000") names. "" or what is wrong with it.
std::string add_fault(std::string_view text, const std::vector<FilterParts>& chosen, Faults& faults);

/// One line a filter: name, format, what it computes and how it rounds.
std::string filter_list(const std::vector<FilterParts>& filters);

/// One line a fault: name, alias, what it does, in which of the filters it can be seen.
std::string fault_list(const std::vector<FilterParts>& filters);

/// The word of `words` with the fewest edits from `word`.
std::string_view nearest(std::string_view word, const std::vector<std::string_view>& words);

}  // namespace halflsb::board
