#include "runner/config/problems.hpp"

#include <algorithm>

namespace halflsb {

void Problems::add(Place place, std::string_view problem, std::string_view remedy) {
    entries_.push_back({place, source_->render(place, problem, remedy)});
}

void Problems::add_rendered(Place place, std::string text) { entries_.push_back({place, std::move(text)}); }

ReadProblems Problems::sorted() const {
    std::vector<Entry> entries = entries_;
    std::stable_sort(entries.begin(), entries.end(), [](const Entry& a, const Entry& b) { return a.place < b.place; });
    ReadProblems problems;
    for (Entry& entry : entries) problems.texts.push_back(std::move(entry.text));
    return problems;
}

}  // namespace halflsb
