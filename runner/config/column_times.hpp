// What a column of times says of the sample rate. Inside this room only.
#pragma once

#include <cstddef>
#include <optional>
#include <span>
#include <string>
#include <string_view>

namespace halflsb {

struct ColumnTimes {
    std::span<const double> times_s;
    double resolution_s = 0.0;                    ///< worth of the last digit that the file gives
    std::optional<double> expected_rate_hz = {};  ///< asked first, so that rounded times state it exactly
};

/// Each time lies where the rate puts it, counted from the first one: within one unit of the last digit (two
/// times rounded by half of it), but not a fifth of a step, and 1e-6 of the time since the first.
bool fits(const ColumnTimes& times, double rate_hz);

struct TimesRate {
    std::optional<double> rate_hz;  ///< none of a single time
    std::size_t index = 0;          ///< of the time to blame
    std::string problem, remedy;    ///< "" when all is well
};
TimesRate rate_of(const ColumnTimes& times);

/// The worth of the last digit of a decimal number: 0.001 of "12.345", 1e-5 of "1.25e-3".
double resolution_of(std::string_view number);

}  // namespace halflsb
