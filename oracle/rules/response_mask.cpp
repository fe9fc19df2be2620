#include "oracle/rules/response_mask.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "oracle/rules/weighting_curves.hpp"

namespace halflsb {
namespace {

constexpr double infinity = std::numeric_limits<double>::infinity();

MaskLimits wider(const MaskLimits& a, const MaskLimits& b) {
    return {std::min(a.min_db, b.min_db), std::max(a.max_db, b.max_db)};
}

/// part of the way from a to b; nothing is between a number and no limit but no limit.
double between(double a, double b, double part) {
    if (a == b) return a;
    if (std::isinf(a) || std::isinf(b)) return std::isinf(a) ? a : b;
    return a + (b - a) * part;
}

/// A frequency that was computed may miss a corner by a rounding.
bool is_at(double hz, const MaskCorner& corner) { return std::fabs(hz - corner.hz) <= 1e-9 * std::max(1.0, hz); }

MaskLimits limits_around(const ResponseMask& mask, double hz) {
    MaskLimits at_corner{infinity, -infinity};
    bool has_corner = false;
    for (const MaskCorner& corner : mask.corners) {
        if (!is_at(hz, corner)) continue;
        at_corner = wider(at_corner, corner.limits);
        has_corner = true;
    }
    if (has_corner) return at_corner;
    if (hz < mask.corners.front().hz || hz > mask.corners.back().hz) {
        if (!mask.ends_stay) return {-infinity, infinity};
        return hz < mask.corners.front().hz ? mask.corners.front().limits : mask.corners.back().limits;
    }
    const auto after = std::upper_bound(mask.corners.begin(), mask.corners.end(), hz,
                                        [](double value, const MaskCorner& corner) { return value < corner.hz; });
    const MaskCorner &a = *std::prev(after), &b = *after;
    if (mask.between == ResponseMask::Between::wider) return wider(a.limits, b.limits);
    const double part = std::log(hz / a.hz) / std::log(b.hz / a.hz);
    return {between(a.limits.min_db, b.limits.min_db, part), between(a.limits.max_db, b.limits.max_db, part)};
}

}  // namespace

double ResponseMask::from_hz() const { return ends_stay ? 0.0 : corners.front().hz; }
double ResponseMask::to_hz() const { return ends_stay ? infinity : corners.back().hz; }

MaskLimits ResponseMask::limits_at(double hz) const {
    const MaskLimits around = limits_around(*this, hz);
    if (std::isinf(around.min_db) && std::isinf(around.max_db)) return around;
    const double middle = shift_db + nominal_db(nominal, hz);
    return {around.min_db + middle, around.max_db + middle};
}

}  // namespace halflsb
