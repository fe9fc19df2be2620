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
    if (rounding == Rounding::floor) return std::floor(value);
    // Split by size: whole and fraction are then exact, while value - floor(value) is not just below 0,
    // and value + 1/2 is not just below 1/2. A NaN or infinity compares false and falls through.
    const double size = std::abs(value);
    const double whole = std::floor(size);
    const double fraction = size - whole;
    bool away = fraction > 0.5;
    switch (rounding) {
        case Rounding::floor:
        case Rounding::toward_zero:
            away = false;
            break;
        case Rounding::half_up:
            away = away || (fraction == 0.5 && value > 0.0);
            break;
        case Rounding::half_away:
            away = away || fraction == 0.5;
            break;
        case Rounding::half_even:
            away = away || (fraction == 0.5 && std::floor(whole * 0.5) != whole * 0.5);
            break;
    }
    return std::copysign(away ? whole + 1.0 : whole, value);
}

}  // namespace halflsb
