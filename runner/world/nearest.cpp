#include "runner/world/nearest.hpp"

#include <algorithm>
#include <cstddef>

namespace halflsb {

namespace {

constexpr std::size_t longest_word_bytes = 64;

char lower(char c) { return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c; }

/// Dashes and underscores are the same to somebody who types, so are the cases of letters.
char folded(char c) { return c == '-' ? '_' : lower(c); }

/// Optimal string alignment distance over three rows.
std::size_t edits(std::string_view a, std::string_view b) {
    std::vector<std::size_t> before_last(b.size() + 1), last(b.size() + 1), row(b.size() + 1);
    for (std::size_t j = 0; j <= b.size(); ++j) last[j] = j;
    for (std::size_t i = 1; i <= a.size(); ++i) {
        row[0] = i;
        for (std::size_t j = 1; j <= b.size(); ++j) {
            const bool same = folded(a[i - 1]) == folded(b[j - 1]);
            row[j] = std::min({last[j] + 1, row[j - 1] + 1, last[j - 1] + (same ? 0 : 1)});
            if (i > 1 && j > 1 && folded(a[i - 1]) == folded(b[j - 2]) && folded(a[i - 2]) == folded(b[j - 1])) {
                row[j] = std::min(row[j], before_last[j - 2] + 1);
            }
        }
        before_last.swap(last);
        last.swap(row);
    }
    return last[b.size()];
}

}  // namespace

std::string_view nearest_word(std::string_view word, const std::vector<std::string_view>& known) {
    if (word.size() > longest_word_bytes) return {};
    std::string_view nearest;
    std::size_t fewest = longest_word_bytes;
    for (const std::string_view candidate : known) {
        const std::size_t distance = edits(word, candidate);
        const std::size_t allowed = std::max<std::size_t>(1, std::max(word.size(), candidate.size()) / 3);
        if (distance <= allowed && distance < fewest) {
            fewest = distance;
            nearest = candidate;
        }
    }
    return nearest;
}

std::string joined_words(const std::vector<std::string_view>& words, std::string_view last_separator) {
    std::string text;
    for (std::size_t i = 0; i < words.size(); ++i) {
        if (i > 0) text += i + 1 == words.size() ? last_separator : ", ";
        text += words[i];
    }
    return text;
}

}  // namespace halflsb
