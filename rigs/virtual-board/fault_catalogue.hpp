// Every fault that the virtual board can show, by name.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "rigs/virtual-board/clean_filters.hpp"
#include "rigs/virtual-board/line_faults.hpp"
#include "rigs/virtual-board/passage_faults.hpp"

namespace halflsb::board {

/// All faults of one board together.
struct Faults {
    TableFaults tables;
    Deviation deviation;
    std::vector<PassageFault> passage;
    LineFaults line;
    std::vector<std::string> names;  ///< as given
};

/// Which filters a fault can be seen in.
enum class Shows {
    any_filter,
    line,
    fixed_average,
    tie,
    sum_or_product,
    product,
    quantised_table,
    biquad,
    feedback,
    asymmetric_fir
};
bool shows_in(Shows shows, FilterKind kind);

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

/// One line a fault: name, alias, what it does, in which of the filters it can be seen.
std::string fault_list(const std::vector<FilterParts>& filters);

/// The word of `words` with the fewest edits from `word`.
std::string_view nearest(std::string_view word, const std::vector<std::string_view>& words);

}  // namespace halflsb::board
