#include "runner/cli/nearest.hpp"

#include <algorithm>

namespace halflsb {

std::size_t edit_distance(std::string_view a, std::string_view b) {
    const std::size_t width = b.size() + 1;
    std::vector<std::size_t> table((a.size() + 1) * width);
    const auto at = [&](std::size_t i, std::size_t j) -> std::size_t& { return table[i * width + j]; };
    for (std::size_t i = 0; i <= a.size(); ++i) at(i, 0) = i;
    for (std::size_t j = 0; j <= b.size(); ++j) at(0, j) = j;
    for (std::size_t i = 1; i <= a.size(); ++i) {
        for (std::size_t j = 1; j <= b.size(); ++j) {
            const std::size_t differs = a[i - 1] != b[j - 1] ? 1 : 0;
            at(i, j) = std::min({at(i - 1, j) + 1, at(i, j - 1) + 1, at(i - 1, j - 1) + differs});
            if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1]) {
                at(i, j) = std::min(at(i, j), at(i - 2, j - 2) + 1);
            }
        }
    }
    return at(a.size(), b.size());
}

std::optional<std::string> nearest_of(std::string_view word, const std::vector<std::string>& known) {
    constexpr std::size_t longest_word = 100;  // nobody mistypes that much, and the time is a product
    if (word.size() > longest_word) return std::nullopt;
    std::optional<std::string> nearest;
    std::size_t smallest = 0;
    for (const std::string& candidate : known) {
        const std::size_t distance = edit_distance(word, candidate);
        const std::size_t allowed = std::max<std::size_t>(1, std::max(word.size(), candidate.size()) / 3);
        if (distance <= allowed && (!nearest || distance < smallest)) {
            nearest = candidate;
            smallest = distance;
        }
    }
    return nearest;
}

}  // namespace halflsb
