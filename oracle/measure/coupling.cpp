#include "oracle/measure/coupling.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

CouplingMeasure::CouplingMeasure(std::size_t references, std::int64_t samples)
    : references_(references),
      samples_(std::max<std::int64_t>(samples, 1)),
      x_(references),
      sums_(static_cast<std::size_t>(coupling_batches) * references * lags),
      responses_(coupling_batches) {}

void CouplingMeasure::add(std::span<const std::span<const double>> references, std::span<const double> response) {
    for (std::size_t k = 0; k < references_; ++k) x_[k].insert(x_[k].end(), references[k].begin(), references[k].end());
    y_.insert(y_.end(), response.begin(), response.end());
    if (y_.size() < lags) return;
    // Each sample that has all its lags; the first and the last ones have not.
    const std::size_t ready = y_.size() - (lags - 1);
    for (std::size_t i = 0; i < ready; ++i)
        take(first_ + static_cast<std::int64_t>(i) + coupling_lags, i + static_cast<std::size_t>(coupling_lags));
    for (std::vector<double>& x : x_) x.erase(x.begin(), x.begin() + static_cast<std::ptrdiff_t>(ready));
    y_.erase(y_.begin(), y_.begin() + static_cast<std::ptrdiff_t>(ready));
    first_ += static_cast<std::int64_t>(ready);
}

void CouplingMeasure::take(std::int64_t index, std::size_t place) {
    const std::int64_t share = index * coupling_batches / samples_;
    const auto batch = static_cast<std::size_t>(std::min<std::int64_t>(share, coupling_batches - 1));
    const double y = y_[place];
    Response& response = responses_[batch];
    response.count += 1.0;
    response.y += y;
    response.yy += y * y;
    for (std::size_t k = 0; k < references_; ++k) {
        const double* const newest = x_[k].data() + place + coupling_lags;
        for (std::size_t lag = 0; lag < lags; ++lag) {
            const double x = newest[-static_cast<std::ptrdiff_t>(lag)];
            Sums& sums = at(batch, k * lags + lag);
            sums.x += x;
            sums.xx += x * x;
            sums.xy += x * y;
        }
    }
}

CouplingFigures CouplingMeasure::value() const {
    Response all;
    for (const Response& each : responses_) {
        all.count += each.count;
        all.y += each.y;
        all.yy += each.yy;
    }
    CouplingFigures best;
    if (!std::isfinite(all.yy)) {
        best.amplitude.value = best.correlation = NAN;
        return best;
    }
    const double mean_y = all.count > 0.0 ? all.y / all.count : 0.0;
    const double squares_y = all.yy - all.count * mean_y * mean_y;
    // What is left of equal values by rounding is no variation.
    if (!(squares_y > 1e-12 * all.yy)) return best;
    for (std::size_t candidate = 0; candidate < candidates(); ++candidate) {
        Sums total;
        for (std::size_t batch = 0; batch < responses_.size(); ++batch) {
            total.x += at(batch, candidate).x;
            total.xx += at(batch, candidate).xx;
            total.xy += at(batch, candidate).xy;
        }
        const double mean_x = total.x / all.count;
        const double squares_x = total.xx - all.count * mean_x * mean_x;
        if (!(squares_x > 1e-12 * total.xx)) continue;
        const double product = total.xy - all.count * mean_x * mean_y;
        const double correlation = product / std::sqrt(squares_x * squares_y);
        if (best.varies && std::fabs(correlation) <= std::fabs(best.correlation)) continue;
        const double b = product / squares_x;
        double squares_e = 0.0;
        for (std::size_t batch = 0; batch < responses_.size(); ++batch) {
            const Sums& sums = at(batch, candidate);
            const Response& each = responses_[batch];
            const double xy = sums.xy - mean_y * sums.x - mean_x * each.y + each.count * mean_x * mean_y;
            const double xx = sums.xx - 2.0 * mean_x * sums.x + each.count * mean_x * mean_x;
            squares_e += (xy - b * xx) * (xy - b * xx);
        }
        constexpr double batches = coupling_batches;
        best.varies = true;
        best.correlation = correlation;
        best.amplitude = {b, std::sqrt(batches / (batches - 1.0) * squares_e) / squares_x};
        best.reference = candidate / lags;
        best.lag_samples = static_cast<int>(candidate % lags) - coupling_lags;
    }
    return best;
}

}  // namespace halflsb
