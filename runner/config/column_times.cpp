#include "runner/config/column_times.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <cstdint>

#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr double rate_tolerance = 1e-6;
/// A missing sample is off by at least a quarter of the mean step (steps of 1, 2, 1).
constexpr double widest_tolerance_steps = 0.2;

/// The first time that is not where the rate puts it; the count when there is none.
std::size_t first_misfit(const ColumnTimes& times, double rate_hz) {
    const double rounding_s = std::min(times.resolution_s, widest_tolerance_steps / rate_hz);
    for (std::size_t i = 1; i < times.times_s.size(); ++i) {
        const double since_s = static_cast<double>(i) / rate_hz;
        const double off_s = std::fabs(times.times_s[i] - times.times_s[0] - since_s);
        if (!(off_s <= rounding_s + rate_tolerance * since_s)) return i;
    }
    return times.times_s.size();
}

}  // namespace

bool fits(const ColumnTimes& times, double rate_hz) { return first_misfit(times, rate_hz) == times.times_s.size(); }

TimesRate rate_of(const ColumnTimes& times) {
    TimesRate found;
    const std::size_t count = times.times_s.size();
    if (count < 2) return found;
    const double rate_hz = static_cast<double>(count - 1) / (times.times_s[count - 1] - times.times_s[0]);
    if (!std::isfinite(rate_hz) || !(rate_hz > 0.0)) {
        found.problem = "the times of time_s do not grow";
        found.remedy = "give the time of each sample in seconds, or leave the column out";
        return found;
    }
    if (times.expected_rate_hz && fits(times, *times.expected_rate_hz)) {
        found.rate_hz = times.expected_rate_hz;
        return found;
    }
    if (fits(times, rate_hz)) {
        found.rate_hz = rate_hz;
        return found;
    }
    // Against the rate that was meant, where it is known: the mean of all would blame the wrong sample.
    const double wanted_hz = times.expected_rate_hz.value_or(rate_hz);
    found.index = first_misfit(times, wanted_hz);
    found.problem = "the step of time_s is not constant: " + number_text(times.times_s[found.index]) + " s at sample " +
                    std::to_string(found.index) + ", where " + number_text(wanted_hz) + " Hz wants " +
                    number_text(times.times_s[0] + static_cast<double>(found.index) / wanted_hz) + " s";
    found.remedy =
        "samples must be evenly spaced: mend the record, give the times more digits, or leave the column out";
    return found;
}

double resolution_of(std::string_view number) {
    const std::size_t e = number.find_first_of("eE");
    const std::string_view mantissa = number.substr(0, e);
    const std::size_t point = mantissa.find('.');
    int written = 0;  // beyond 32 bits: 0 is as good as any, the number is 0 itself
    if (e != std::string_view::npos) {
        std::string_view digits = number.substr(e + 1);
        if (digits.starts_with('+')) digits.remove_prefix(1);
        std::from_chars(digits.data(), digits.data() + digits.size(), written);
    }
    std::int64_t exponent = written;
    if (point != std::string_view::npos) exponent -= static_cast<std::int64_t>(mantissa.size() - point - 1);
    return std::pow(10.0, static_cast<double>(exponent));
}

}  // namespace halflsb
