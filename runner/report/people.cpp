#include "runner/report/people.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>

namespace halflsb {

namespace {

constexpr int fewest_digits = 4;
/// A judged figure has no more.
constexpr int most_digits = 9;

std::string to_chars_text(double value, std::chars_format format, int precision) {
    std::array<char, 400> buffer;  // a fixed double takes up to 309 digits before the point
    const auto end = std::to_chars(buffer.data(), buffer.data() + buffer.size(), value, format, precision);
    return std::string(buffer.data(), end.ptr);
}

void cut_trailing_zeros(std::string& text) {
    const std::size_t point = text.find('.');
    if (point == std::string::npos) return;
    const std::size_t exponent = std::min(text.find('e'), text.size());
    std::size_t end = exponent;
    while (end > point && (text[end - 1] == '0' || end - 1 == point)) --end;
    text.erase(end, exponent - end);
}

}  // namespace

std::string rounded_text(double value, int digits) {
    if (std::isnan(value)) return "not a number";
    if (std::isinf(value)) return value > 0 ? "infinite" : "-infinite";
    if (value == 0.0) return "0";
    if (value == std::trunc(value) && std::fabs(value) < 1e15) {
        return to_chars_text(value, std::chars_format::fixed, 0);
    }
    const double size = std::fabs(value);
    std::string text;
    if (size < 1e-4 || size >= 1e9) {
        text = to_chars_text(value, std::chars_format::scientific, digits - 1);
    } else {
        const int before_point = static_cast<int>(std::floor(std::log10(size))) + 1;
        text = to_chars_text(value, std::chars_format::fixed, std::max(0, digits - before_point));
    }
    cut_trailing_zeros(text);
    return text;
}

std::string fixed_text(double value, int decimals) {
    if (std::isnan(value)) return "not a number";
    if (std::isinf(value)) return value > 0 ? "infinite" : "-infinite";
    std::string text = to_chars_text(value, std::chars_format::fixed, decimals);
    if (text.find_first_not_of("-0.") == std::string::npos && text.front() == '-') text.erase(0, 1);
    return text;
}

std::pair<std::string, std::string> compared_text(double value, double limit) {
    for (int digits = fewest_digits;; ++digits) {
        std::pair<std::string, std::string> texts{rounded_text(value, digits), rounded_text(limit, digits)};
        if (digits == most_digits || value == limit || texts.first != texts.second) return texts;
    }
}

std::string count_text(std::int64_t count) {
    std::string text = std::to_string(count);
    const std::size_t sign = count < 0 ? 1 : 0;
    if (text.size() - sign < 5) return text;
    for (std::size_t i = text.size(); i > sign + 3;) {
        i -= 3;
        text.insert(i, 1, ',');
    }
    return text;
}

std::string counted(std::int64_t count, std::string_view singular, std::string_view plural) {
    return count_text(count) + " " + std::string(count == 1 ? singular : plural);
}

std::string duration_text(double seconds) {
    if (!(seconds > 0.0)) return "0 s";
    // The bounds are where the next unit's rounding begins, so that "1000 ms" and "60 s" never show.
    if (seconds < 0.0009995) return rounded_text(std::max(1.0, std::round(seconds * 1e6)), 3) + " us";
    if (seconds < 0.9995) return rounded_text(seconds * 1e3, 3) + " ms";
    if (seconds < 59.95) return rounded_text(seconds, 3) + " s";
    const auto whole = static_cast<std::int64_t>(std::llround(std::min(seconds, 1e15)));
    if (whole < 3600) return std::to_string(whole / 60) + " min " + std::to_string(whole % 60) + " s";
    const std::int64_t minutes = (whole + 30) / 60;
    return count_text(minutes / 60) + " h " + std::to_string(minutes % 60) + " min";
}

std::string rate_text(double rate_hz) {
    return rate_hz >= 10e3 ? rounded_text(rate_hz / 1e3) + " kHz" : rounded_text(rate_hz) + " Hz";
}

}  // namespace halflsb
