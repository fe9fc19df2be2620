// Time, as a seam: everything that waits takes a Clock, so tests crank it by hand.
#pragma once

#include <chrono>
#include <string>

namespace halflsb {

using Duration = std::chrono::nanoseconds;
/// On a clock that never steps; the zero is arbitrary.
using Instant = std::chrono::time_point<std::chrono::steady_clock, Duration>;

class Clock {
public:
    virtual ~Clock() = default;
    virtual Instant now() const = 0;
    /// UTC as "2026-12-01T09:30:00Z", for records and folder names.
    virtual std::string utc() const = 0;
};

class SystemClock final : public Clock {
public:
    Instant now() const override;
    std::string utc() const override;
};

inline Duration seconds(double s) { return std::chrono::duration_cast<Duration>(std::chrono::duration<double>(s)); }
inline double to_seconds(Duration d) { return std::chrono::duration<double>(d).count(); }

}  // namespace halflsb
