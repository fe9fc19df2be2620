#include "runner/world/clock.hpp"

#include <cstdio>
#include <ctime>

namespace halflsb {

Instant SystemClock::now() const { return std::chrono::time_point_cast<Duration>(std::chrono::steady_clock::now()); }

std::string SystemClock::utc() const {
    const std::time_t seconds_since_epoch = std::chrono::system_clock::to_time_t(std::chrono::system_clock::now());
    std::tm parts{};
    gmtime_r(&seconds_since_epoch, &parts);
    // Not strftime: the text must not depend on a locale.
    char text[64];
    std::snprintf(text, sizeof text, "%04d-%02d-%02dT%02d:%02d:%02dZ", parts.tm_year + 1900, parts.tm_mon + 1,
                  parts.tm_mday, parts.tm_hour, parts.tm_min, parts.tm_sec);
    return text;
}

}  // namespace halflsb
