#include "oracle/filters/coefficient_table.hpp"

namespace halflsb {

std::string quoted_from_file(std::string_view text) {
    constexpr std::size_t most_characters = 40;
    std::string shown = "\"";
    for (const char c : text.substr(0, most_characters)) shown += c >= ' ' && c <= '~' ? c : '?';
    return shown + (text.size() > most_characters ? "...\"" : "\"");
}

}  // namespace halflsb
