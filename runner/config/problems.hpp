// All that is wrong with one file and with those that it includes, gathered while they are read and shown in
// the order of the lines.
#pragma once

#include <map>
#include <string>
#include <string_view>
#include <vector>

#include "runner/config/source_text.hpp"

namespace halflsb {

/// Whole messages, ready to be printed one after the other.
struct ReadProblems {
    std::vector<std::string> texts;
};

class Problems {
public:
    /// The source must outlive this. `position_name` is what positions call it that outlive the reading
    /// (PlanPosition); the source's own name when empty.
    explicit Problems(const SourceText& source, std::string position_name = {});

    /// A further file of the same reading; it must outlive this. Gives what Place::source calls it.
    int add_source(const SourceText& source, std::string position_name);

    void add(Place place, std::string_view problem, std::string_view remedy);
    /// A message made elsewhere, about another file that is named at `place`.
    void add_rendered(Place place, std::string text);
    /// How often something was added, repetitions too.
    std::size_t count() const { return count_; }

    const SourceText& source(int index = 0) const { return *sources_[static_cast<std::size_t>(index)].text; }
    /// What positions call the file of a place.
    const std::string& file_of(Place place) const;
    /// The reverse; of a file that is not known the first one.
    Place place_in(std::string_view file, int line, int column) const;
    /// "line 12", or "line 12 of common.toml" when that is another file than the one of `seen_from`.
    std::string line_text(Place place, Place seen_from) const;

    /// Sorted by file and place; those of one place in the order in which they were added. What was said at
    /// one place twice is told once: a table may be read many times.
    ReadProblems sorted() const;

private:
    struct Source {
        const SourceText* text;
        std::string position_name;
    };
    std::vector<Source> sources_;
    std::map<Place, std::vector<std::string>> texts_;
    std::size_t count_ = 0;
};

}  // namespace halflsb
