#include "stimuli/rounding.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

const std::vector<std::string_view>& rounding_names() {
    static const std::vector<std::string_view> names = {"floor", "toward-zero", "half-up", "half-away", "half-even"};
    return names;
}

std::string_view name_of(Rounding rounding) { return rounding_names()[static_cast<std::size_t>(rounding)]; }

std::optional<Rounding> rounding_from(std::string_view name) {
    const auto& names = rounding_names();
    const auto found = std::find(names.begin(), names.end(), name);
    if (found == names.end()) return std::nullopt;
    return static_cast<Rounding>(found - names.begin());
}

double round_to_whole(double value, Rounding rounding) {
    // floor and the fraction are exact, so a tie is recognised without adding 1/2, which would itself
    // round (0.49999999999999994 + 0.5 is 1.0). A NaN compares false everywhere and falls through.
    const double below = std::floor(value);
    const double fraction = value - below;
    switch (rounding) {
        case Rounding::floor:
            return below;
        case Rounding::toward_zero:
            return value < 0.0 && fraction > 0.0 ? below + 1.0 : below;
        case Rounding::half_up:
            return fraction >= 0.5 ? below + 1.0 : below;
        case Rounding::half_away:
            return fraction > 0.5 || (fraction == 0.5 && value > 0.0) ? below + 1.0 : below;
        case Rounding::half_even: {
            if (fraction != 0.5) return fraction > 0.5 ? below + 1.0 : below;
            const double half = below * 0.5;
            return std::floor(half) == half ? below : below + 1.0;
        }
    }
    return below;
}

}  // namespace halflsb
