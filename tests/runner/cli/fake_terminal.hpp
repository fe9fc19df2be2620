// A terminal that remembers what was written and is what a test says it is.
#pragma once

#include <map>
#include <string>

#include "runner/cli/terminal.hpp"
#include "runner/world/clock.hpp"

namespace halflsb {

class FakeTerminal final : public Terminal {
public:
    bool out_is_terminal = false, err_is_terminal = false;
    int columns = 0;
    std::map<std::string, std::string> variables;
    std::string out, err;  ///< what was written
    int writes = 0;
    bool full = false;  ///< every write fails

    bool is_terminal(Stream stream) const override { return stream == Stream::out ? out_is_terminal : err_is_terminal; }
    int reported_columns(Stream) const override { return columns; }
    std::optional<std::string> environment(const std::string& name) const override {
        const auto found = variables.find(name);
        return found == variables.end() ? std::nullopt : std::optional<std::string>(found->second);
    }
    Outcome<void> write(Stream stream, std::string_view text) override {
        ++writes;
        if (full) return Error{ErrorKind::output, "standard error", "no space", ""};
        (stream == Stream::out ? out : err) += text;
        return {};
    }
};

/// Cranked by hand.
class HandClock final : public Clock {
public:
    Instant time{};
    Instant now() const override { return time; }
    std::string utc() const override { return "2026-12-01T09:30:00Z"; }
    void advance(double s) { time += seconds(s); }
};

}  // namespace halflsb
