// A straight line from one level to another over the shape's own samples, both ends included:
//   ratio(n) = from + (to - from) n / (N - 1),  n = 0 .. N - 1
// in exact rational arithmetic: integers in units of 2^-90 and a remainder over N - 1. What becomes a
// double is rounded to odd (S. Boldo, G. Melquiond, 2008): its lowest bit stands for all that was cut
// off, so it never falls on a tie that the exact value misses, and the quantiser gives the code of the
// exact value in every rounding. A transient; no power to speak of in any one band.
#include <algorithm>
#include <bit>
#include <cmath>

#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"
#include "stimuli/wide.hpp"

namespace halflsb {

namespace {

__extension__ typedef __int128 Int128;

constexpr int unit_bits = 90;

/// In units of 2^-90: exact for a ratio of at least 2^-38 in size, and for every code of 32 bits.
Int128 in_units(double ratio) {
    const double high = std::trunc(ratio * 0x1p45);
    const double low = std::trunc((ratio * 0x1p45 - high) * 0x1p45);
    return (static_cast<Int128>(static_cast<std::int64_t>(high)) << 45) +
           static_cast<Int128>(static_cast<std::int64_t>(low));
}

/// units 2^-90, and something below one unit more where `inexact`, rounded to odd at 53 bits.
double rounded_to_odd(Int128 units, bool inexact) {
    const bool negative = units < 0;
    // Of a negative number the rest counts toward zero: -3 and a bit more is 2 and a bit in size.
    Uint128 size = negative ? static_cast<Uint128>(-units) - (inexact ? 1U : 0U) : static_cast<Uint128>(units);
    const auto high = static_cast<std::uint64_t>(size >> 64);
    const auto low = static_cast<std::uint64_t>(size);
    const int bits = high != 0 ? 128 - std::countl_zero(high) : 64 - std::countl_zero(low);
    const int dropped = std::max(0, bits - 53);
    inexact = inexact || (size & ((Uint128{1} << dropped) - 1U)) != 0;
    size >>= dropped;
    if (inexact) size |= 1U;
    const double value = std::ldexp(static_cast<double>(static_cast<std::uint64_t>(size)), dropped - unit_bits);
    return negative ? -value : value;
}

class Ramp final : public PlacedStimulus {
public:
    Ramp(const Placement& placement, double from_ratio, double to_ratio)
        : PlacedStimulus(placement), from_(in_units(from_ratio)) {
        const Int128 way = in_units(to_ratio) - from_;
        steps_ = static_cast<Uint128>(static_cast<std::uint64_t>(placement.own_samples() - 1));
        rising_ = way >= 0;
        way_ = static_cast<Uint128>(rising_ ? way : -way);
    }
    Spectrum spectrum() const override { return {}; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        // At most 2^91 units times 2^34 samples: within 128 bits.
        const Uint128 first = way_ * static_cast<Uint128>(static_cast<std::uint64_t>(first_own_index));
        Uint128 whole = first / steps_, rest = first % steps_;
        const Uint128 whole_step = way_ / steps_, rest_step = way_ % steps_;
        for (double& ratio : ratios) {
            const bool inexact = rest != 0;
            const auto moved = static_cast<Int128>(whole);
            ratio = rounded_to_odd(rising_ ? from_ + moved : from_ - moved - (inexact ? 1 : 0), inexact);
            whole += whole_step;
            rest += rest_step;
            if (rest >= steps_) {
                rest -= steps_;
                ++whole;
            }
        }
    }

    Int128 from_;
    Uint128 way_ = 0, steps_ = 1;
    bool rising_ = true;
};

StimulusOutcome make_ramp(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = span_of(recipe, values, context);
    if (!placement) return placement.error();
    const auto from = level_of("from", recipe, values, context);
    if (!from) return from.error();
    const auto to = level_of("to", recipe, values, context);
    if (!to) return to.error();
    if (*from == *to) {
        return refused(values.has("to_codes")  ? "to_codes"
                       : values.has("to_unit") ? "to_unit"
                                               : "to_ratio",
                       "the ramp ends where it begins, at " + number_text(*to) + " of full scale",
                       "give another end, or use shape = \"step\"");
    }
    if (placement->own_samples() < 2) {
        return refused("length_samples", "a ramp needs 2 samples, from at_samples on there is 1",
                       "make it longer, or start earlier");
    }
    return std::unique_ptr<const Stimulus>(std::make_unique<Ramp>(*placement, *from, *to));
}

}  // namespace

Shape ramp_shape() {
    std::vector<Parameter> parameters = {length_parameter(), start_parameter()};
    for (const auto& level :
         {level_parameters("from", LevelSign::any, std::nullopt, "Level at at_samples; -1 is the lowest code."),
          level_parameters("to", LevelSign::any, std::nullopt,
                           "Level of the last sample; 1 saturates at the top code.")}) {
        parameters.insert(parameters.end(), level.begin(), level.end());
    }
    return {{.name = "ramp",
             .help = "A straight line from one level to another, both ends included; silence before it.",
             .parameters = std::move(parameters)},
            make_ramp};
}

}  // namespace halflsb
