// All that is wrong with one file, gathered while it is read and shown in the order of the lines.
#pragma once

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
    /// The source must outlive this.
    explicit Problems(const SourceText& source) : source_(&source) {}

    void add(Place place, std::string_view problem, std::string_view remedy);
    /// A message made elsewhere, about another file that is named at `place`.
    void add_rendered(Place place, std::string text);
    std::size_t count() const { return entries_.size(); }
    const SourceText& source() const { return *source_; }
    /// Sorted by place; those of one place in the order in which they were added.
    ReadProblems sorted() const;

private:
    struct Entry {
        Place place;
        std::string text;
    };
    const SourceText* source_;
    std::vector<Entry> entries_;
};

}  // namespace halflsb
