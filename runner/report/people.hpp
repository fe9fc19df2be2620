// Numbers as people read them: 3 to 4 significant digits, a decimal point in every locale, a unit.
// Files get the shortest round-trip text instead (runner/record).
#pragma once

#include <cstdint>
#include <string>
#include <string_view>
#include <utility>

namespace halflsb {

/// `value` to `digits` significant ones (1 to 17), trailing zeros cut: "0.499", "-0.01", "1250000",
/// "1.2e-07". Whole numbers below 1e15 keep all their digits. Never "-0"; NaN is "not a number".
std::string rounded_text(double value, int digits = 4);

/// `value` with exactly `decimals` digits after the point, for columns of a table.
std::string fixed_text(double value, int decimals);

/// Two numbers that are compared: as many digits as it takes (4 to 9) for unequal ones to look
/// unequal, so that "0.5 of 0.5 failed" never appears.
std::pair<std::string, std::string> compared_text(double value, double limit);

/// "12 300 000 samples" stays readable as "12,300,000 samples": groups of three from 10,000 on.
std::string count_text(std::int64_t count);

/// "1 case", "3 cases"
std::string counted(std::int64_t count, std::string_view singular, std::string_view plural);

/// "840 ms", "12.4 s", "3 min 20 s", "2 h 5 min"
std::string duration_text(double seconds);

/// "1200 Hz", "48 kHz"
std::string rate_text(double rate_hz);

}  // namespace halflsb
