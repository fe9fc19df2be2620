#include "runner/config/problems.hpp"

#include <algorithm>

#include "runner/world/printable.hpp"

namespace halflsb {

Problems::Problems(const SourceText& source, std::string position_name) {
    add_source(source, position_name.empty() ? source.name() : std::move(position_name));
}

int Problems::add_source(const SourceText& source, std::string position_name) {
    sources_.push_back({&source, std::move(position_name)});
    return static_cast<int>(sources_.size()) - 1;
}

void Problems::add(Place place, std::string_view problem, std::string_view remedy) {
    add_rendered(place, source(place.source).render(place, problem, remedy));
}

void Problems::add_rendered(Place place, std::string text) {
    ++count_;
    std::vector<std::string>& texts = texts_[place];
    if (std::find(texts.begin(), texts.end(), text) == texts.end()) texts.push_back(std::move(text));
}

const std::string& Problems::file_of(Place place) const {
    return sources_[static_cast<std::size_t>(place.source)].position_name;
}

Place Problems::place_in(std::string_view file, int line, int column) const {
    const auto found = std::find_if(sources_.begin(), sources_.end(),
                                    [&](const Source& source) { return source.position_name == file; });
    return {line, column, found == sources_.end() ? 0 : static_cast<int>(found - sources_.begin())};
}

std::string Problems::line_text(Place place, Place seen_from) const {
    std::string text = "line " + std::to_string(place.line);
    if (place.source != seen_from.source) text += " of " + printable(source(place.source).name());
    return text;
}

ReadProblems Problems::sorted() const {
    ReadProblems problems;
    for (const auto& [place, texts] : texts_) problems.texts.insert(problems.texts.end(), texts.begin(), texts.end());
    return problems;
}

}  // namespace halflsb
