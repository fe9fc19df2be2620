#include "oracle/arithmetic/float_ports.hpp"

#include <algorithm>

namespace halflsb {

FloatOutput::FloatOutput(const Port& port, Rounding rounding, std::string name)
    : port_(port), rounding_(rounding), name_(std::move(name)), scale_(std::ldexp(1.0, port.word.fraction_bits)) {}

void FloatOutput::reset() {
    lowest_ = highest_ = 0.0;
    overflows_ = 0;
}

std::int64_t FloatOutput::operator()(float value) {
    // fmin and fmax leave a NaN out.
    lowest_ = std::fmin(lowest_, static_cast<double>(value));
    highest_ = std::fmax(highest_, static_cast<double>(value));
    const double scaled = static_cast<double>(value) * scale_;  // exact
    if (port_.is_float) return bits_of_float(static_cast<float>(scaled));
    if (std::isnan(scaled)) return 0;
    // From 2^52 on every double is whole.
    const double whole = std::fabs(scaled) < 0x1p52 ? round_to_whole(scaled, rounding_) : scaled;
    const double floor = -std::ldexp(1.0, port_.word.bits - 1), ceiling = -floor - 1.0;
    if (whole >= floor && whole <= ceiling) return static_cast<std::int64_t>(whole);
    ++overflows_;
    if (port_.word.overflow == Overflow::saturate) return static_cast<std::int64_t>(whole < 0.0 ? floor : ceiling);
    if (std::isinf(whole)) return 0;
    const double range = -2.0 * floor;
    double wrapped = std::remainder(whole, range);  // exact; -range / 2 .. range / 2
    if (wrapped > ceiling) wrapped -= range;
    return static_cast<std::int64_t>(wrapped);
}

NodeReach FloatOutput::reach() const { return {name_, port_.word, lowest_, highest_, overflows_}; }

}  // namespace halflsb
