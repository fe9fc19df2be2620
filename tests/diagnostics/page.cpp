#include "tests/diagnostics/page.hpp"

#include <cstdio>
#include <cstdlib>

namespace halflsb::diagnostics {

void Page::chapter(std::string_view title) {
    std::printf("\n%s\n%s\n", std::string(title).c_str(), std::string(title.size(), '=').c_str());
}

void Page::show(std::string_view done, std::string_view text) {
    if (text.empty()) return missing(done);
    std::printf("\n# %s\n", std::string(done).c_str());
    std::fwrite(text.data(), 1, text.size(), stdout);
    if (!text.ends_with('\n')) std::printf("\n");
}

void Page::missing(std::string_view done) {
    is_complete_ = false;
    std::fprintf(stderr, "nothing was said of: %s\n", std::string(done).c_str());
}

std::string spoilt(const std::string& text, std::string_view from, std::string_view to) {
    if (from.empty()) return text + std::string(to);
    const std::size_t at = text.find(from);
    if (at == std::string::npos || text.find(from, at + 1) != std::string::npos) {
        std::fprintf(stderr, "\"%s\" stands not once in the text to spoil\n", std::string(from).c_str());
        std::exit(70);
    }
    return std::string(text).replace(at, from.size(), to);
}

std::string replaced(std::string text, const std::vector<std::pair<std::string, std::string>>& words) {
    for (const auto& [from, to] : words) {
        for (std::size_t at = text.find(from); at != std::string::npos; at = text.find(from, at + to.size()))
            text.replace(at, from.size(), to);
    }
    return text;
}

}  // namespace halflsb::diagnostics
