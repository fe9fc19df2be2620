#include "oracle/judge/units.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>

namespace halflsb {

double worth_of(Limit::In in, const Signal& signal) {
    switch (in) {
        case Limit::In::lsb:
            return lsb_value(signal.output);
        case Limit::In::full_scale_ratio:
            return full_scale_value(signal.output);
        case Limit::In::unit:
            return full_scale_value(signal.output) / std::fabs(*signal.full_scale_unit);
    }
    return 1.0;
}

double finest_step(const SampleFormat& output) {
    return output.has_lsb() ? lsb_value(output) : std::ldexp(full_scale_value(output), -24);
}

double value_of(const Limit& limit, const Signal& signal) { return limit.number * worth_of(limit.in, signal); }

std::string unit_name(Limit::In in, const Signal& signal) {
    switch (in) {
        case Limit::In::lsb:
            return "LSB";
        case Limit::In::full_scale_ratio:
            return "of full scale";
        case Limit::In::unit:
            return signal.unit.empty() ? "unit" : signal.unit;
    }
    return "";
}

Limit::In natural_unit(const Signal& signal) {
    return signal.output.has_lsb() ? Limit::In::lsb : Limit::In::full_scale_ratio;
}

std::string brief(double number) {
    char text[32];
    const auto end = std::to_chars(text, text + sizeof text, number, std::chars_format::general, 4).ptr;
    return std::string(text, end);
}

}  // namespace halflsb
