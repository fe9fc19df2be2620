#include "runner/cli/case_selection.hpp"

#include <algorithm>
#include <set>

#include "runner/world/nearest.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_names_listed = 20;

std::size_t character_bytes(std::string_view text) { return std::max<std::size_t>(1, utf8_sequence_bytes(text)); }

}  // namespace

bool matches_glob(std::string_view pattern, std::string_view name) {
    std::size_t p = 0, n = 0;
    std::size_t after_star = std::string_view::npos, retry = 0;
    while (n < name.size()) {
        if (p < pattern.size() && pattern[p] == '*') {
            after_star = ++p;
            retry = n;
        } else if (p < pattern.size() && pattern[p] == '?') {
            ++p;
            n += character_bytes(name.substr(n));
        } else if (p < pattern.size() && pattern[p] == name[n]) {
            ++p;
            ++n;
        } else if (after_star != std::string_view::npos) {
            // The last star takes one character more.
            p = after_star;
            retry += character_bytes(name.substr(retry));
            n = retry;
        } else {
            return false;
        }
    }
    while (p < pattern.size() && pattern[p] == '*') ++p;
    return p == pattern.size();
}

Outcome<std::vector<std::size_t>> select_cases(const std::vector<std::string>& names,
                                               const std::vector<std::string>& patterns) {
    std::vector<bool> selected(names.size(), patterns.empty());
    for (const std::string& pattern : patterns) {
        const auto exact = std::find(names.begin(), names.end(), pattern);
        bool any = exact != names.end();
        if (any) {
            selected[static_cast<std::size_t>(exact - names.begin())] = true;
        } else {
            for (std::size_t i = 0; i < names.size(); ++i) {
                if (matches_glob(pattern, names[i])) any = selected[i] = true;
            }
        }
        if (any) continue;
        std::string remedy;
        const std::vector<std::string_view> known(names.begin(), names.end());
        if (const auto near = nearest_word(pattern, known); !near.empty())
            remedy = "did you mean '" + printable(near) + "'? ";
        remedy += "the plan's cases are:";
        for (std::size_t i = 0; i < std::min(names.size(), most_names_listed); ++i)
            remedy += "\n    " + printable(names[i]);
        if (names.size() > most_names_listed) {
            remedy += "\n    and " + std::to_string(names.size() - most_names_listed) + " more";
        }
        return Error{ErrorKind::usage, "--case", "no case is named or matched by '" + printable(pattern) + "'", remedy};
    }
    std::vector<std::size_t> indices;
    for (std::size_t i = 0; i < names.size(); ++i) {
        if (selected[i]) indices.push_back(i);
    }
    return indices;
}

Outcome<std::vector<std::size_t>> select_labelled(const std::vector<std::size_t>& selected,
                                                  const std::vector<std::vector<std::string>>& labels_of,
                                                  const std::vector<std::string>& asked) {
    if (asked.empty()) return selected;
    std::set<std::string> known;
    for (const auto& labels : labels_of) known.insert(labels.begin(), labels.end());
    std::string list;
    for (const std::string& label : known) list += (list.empty() ? "" : ", ") + printable(label);
    const std::string remedy = known.empty() ? "the plan's cases have no labels" : "the plan's labels are: " + list;
    for (const std::string& label : asked) {
        if (known.count(label) > 0) continue;
        const std::vector<std::string_view> words(known.begin(), known.end());
        const auto near = nearest_word(label, words);
        return Error{ErrorKind::usage, "--label", "no case has the label '" + printable(label) + "'",
                     (near.empty() ? "" : "did you mean '" + printable(near) + "'? ") + remedy};
    }
    std::vector<std::size_t> kept;
    for (const std::size_t index : selected) {
        const auto& labels = labels_of[index];
        if (std::any_of(asked.begin(), asked.end(), [&](const std::string& label) {
                return std::find(labels.begin(), labels.end(), label) != labels.end();
            }))
            kept.push_back(index);
    }
    if (kept.empty())
        return Error{ErrorKind::usage, "--label", "none of the cases that --case selects has such a label", remedy};
    return kept;
}

}  // namespace halflsb
