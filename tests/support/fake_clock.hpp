// A clock that stands until it is cranked.
#pragma once

#include <string>

#include "runner/world/clock.hpp"

namespace halflsb::test {

class FakeClock final : public Clock {
public:
    Instant now() const override { return now_; }
    std::string utc() const override { return "2026-12-01T09:30:00Z"; }

    void advance(Duration by) { now_ += by; }
    void advance_to(Instant instant) {
        if (instant > now_) now_ = instant;
    }
    /// Since the clock was made.
    Duration elapsed() const { return now_ - start; }

private:
    static constexpr Instant start{std::chrono::hours(1)};
    Instant now_ = start;
};

}  // namespace halflsb::test
