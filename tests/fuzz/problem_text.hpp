// The form of what the readers of plans and rigs say: file:line:column: problem, the line, a caret, a remedy.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "runner/config/problems.hpp"
#include "runner/world/printable.hpp"
#include "tests/fuzz/target.hpp"

namespace halflsb::fuzz {

/// A number of at least 1 at the front of `text`, and the colon behind it, are taken away.
inline bool take_position(std::string_view& text) {
    const std::size_t digits = text.find_first_not_of("0123456789");
    if (digits == std::string_view::npos || digits == 0 || text[0] == '0' || text[digits] != ':') return false;
    text.remove_prefix(digits + 1);
    return true;
}

/// FILE: byte N: problem, and a remedy: of a file that has no lines.
inline bool is_about_bytes(std::string_view message, const std::string& file) {
    const std::string start = file + ": byte ";
    if (!message.starts_with(start)) return false;
    message.remove_prefix(start.size());
    const std::size_t digits = message.find_first_not_of("0123456789"), end = message.find("\n  ");
    return digits > 0 && digits < message.size() && message[digits] == ':' && end != std::string_view::npos &&
           end > digits + 2 && message.size() > end + 3 && message.find('\n', end + 1) == std::string_view::npos;
}

/// "" or what is wrong with the form of a message about `file`.
inline std::string fault_of_form(std::string_view message, const std::string& file) {
    if (is_about_bytes(message, file)) return "";
    if (!message.starts_with(file + ":")) return "it does not begin with the file";
    message.remove_prefix(file.size() + 1);
    if (!take_position(message) || !take_position(message)) return "it has no line and column";
    std::vector<std::string_view> lines;
    for (std::size_t end = 0; end != std::string_view::npos;) {
        end = message.find('\n');
        lines.push_back(message.substr(0, end));
        if (end != std::string_view::npos) message.remove_prefix(end + 1);
    }
    if (lines.size() != 4) return "it has not 4 lines";
    if (lines[0].size() < 3) return "it states no problem";
    if (!lines[1].starts_with("    ") || !lines[2].starts_with("    ")) return "line or caret are not indented";
    const std::size_t caret = lines[2].find_first_not_of(' ');
    if (caret == std::string_view::npos || lines[2].substr(caret) != "^") return "it has no caret";
    if (caret - 4 > columns_of(lines[1].substr(4))) return "the caret stands behind the line";
    if (!lines[3].starts_with("  ") || lines[3].size() < 3) return "it has no remedy";
    return "";
}

/// Each message is about one of `files`.
inline void require_whole_messages(const ReadProblems& problems, const std::vector<std::string>& files) {
    require(!problems.texts.empty(), "a refused file has a message");
    for (const std::string& text : problems.texts) {
        require(printable_lines(text) == text, "a message can be shown on any terminal", text);
        std::string faults;
        bool is_whole = false;
        for (const std::string& file : files) {
            const std::string fault = fault_of_form(text, file);
            is_whole = is_whole || fault.empty();
            faults += file + ": " + fault + "\n";
        }
        require(is_whole, "a message is whole", faults + text);
    }
}

}  // namespace halflsb::fuzz
