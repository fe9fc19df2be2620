#include "runner/shell_words.hpp"

#include <algorithm>
#include <string_view>

#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

bool is_plain(char c) {
    return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') ||
           std::string_view("_-./:=@+,").find(c) != std::string_view::npos;
}

/// Every byte that is no visible ASCII as "\xff".
std::string escaped(const std::string& word) {
    std::string out = "$'";
    for (const char c : word) {
        const auto byte = static_cast<unsigned char>(c);
        if (c == '\'' || c == '\\') {
            out += '\\';
            out += c;
        } else if (byte >= 0x20 && byte < 0x7f) {
            out += c;
        } else {
            out += "\\x";
            out += "0123456789abcdef"[byte >> 4];
            out += "0123456789abcdef"[byte & 15];
        }
    }
    return out + "'";
}

}  // namespace

std::string shell_quoted(const std::string& word) {
    if (!word.empty() && std::all_of(word.begin(), word.end(), is_plain)) return word;
    // What a report would have to escape could not be pasted as it shows.
    if (printable(word) != word) return escaped(word);
    std::string quoted = "'";
    for (const char c : word) quoted += c == '\'' ? std::string("'\\''") : std::string(1, c);
    return quoted + "'";
}

std::string case_option(const std::string& name) {
    return name.starts_with('-') ? shell_quoted("--case=" + name) : "--case " + shell_quoted(name);
}

}  // namespace halflsb
