// From the pages of a greeting (docs/wire.md §2.1) to a Greeting, and what is refused on the way.
#pragma once

#include <string>

#include "runner/wire/messages.hpp"
#include "runner/wire/wire.hpp"

namespace halflsb {

class GreetingReader {
public:
    /// `place` is what errors call the board: the link's name.
    explicit GreetingReader(std::string place) : place_(std::move(place)) {}

    /// Takes page 0, then each further page in order. Errors (kind bench): a page that cannot be read, an
    /// unknown protocol or format, no credit, text that is no clean UTF-8, pages that contradict each other.
    Outcome<void> add(const message::GreetingPage& page);
    /// 1 before the first page was read.
    int pages() const { return pages_; }
    bool is_complete() const { return read_ == pages_; }
    const Greeting& greeting() const { return greeting_; }

private:
    Outcome<void> add_board(message::BytesView rest);
    Outcome<void> add_filter(message::BytesView rest);
    Outcome<void> add_setting(message::BytesView rest);
    Outcome<SampleFormat> format(std::uint8_t number, const std::string& where) const;
    Outcome<void> check_name(const std::string& name, const std::string& where) const;
    Error refused(std::string problem) const;

    std::string place_;
    Greeting greeting_;
    int pages_ = 1, read_ = 0, filters_ = 0;
};

/// Well-formed UTF-8 (Unicode 15, table 3-7) without control characters, fit for a terminal.
bool is_clean_utf8(std::string_view text);

}  // namespace halflsb
