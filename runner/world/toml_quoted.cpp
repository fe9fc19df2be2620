#include "runner/world/toml_quoted.hpp"

#include "runner/world/printable.hpp"

namespace halflsb {

std::string toml_quoted(std::string_view text) {
    std::string out = "\"";
    for (const char c : valid_utf8(text)) {
        const auto byte = static_cast<unsigned char>(c);
        if (c == '"' || c == '\\') {
            out += '\\';
            out += c;
        } else if (byte < 0x20 || byte == 0x7f) {
            out += "\\u00";
            out += "0123456789abcdef"[byte >> 4];
            out += "0123456789abcdef"[byte & 15];
        } else {
            out += c;
        }
    }
    return out + "\"";
}

}  // namespace halflsb
