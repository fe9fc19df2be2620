#include "oracle/measure/response.hpp"

#include <cmath>
#include <limits>

namespace halflsb {

std::vector<ResponsePoint> ResponseMeasure::value() const {
    constexpr double none = std::numeric_limits<double>::quiet_NaN();
    const ResponseSums all = sums();
    std::vector<ResponsePoint> points(all.cycles_per_sample.size());
    for (std::size_t k = 0; k < points.size(); ++k) {
        std::complex<double> cross;
        double power = 0.0;
        for (std::size_t batch = 0; batch < all.sums.batches(); ++batch) {
            cross += all.sums.cross(batch, k);
            power += all.sums.power(batch, k);
        }
        points[k].cycles_per_sample = all.cycles_per_sample[k];
        points[k].averages = all.averages;
        points[k].difference = power > 0.0 ? cross / power : std::complex<double>(none, none);
        if (all.averages > 0) points[k].stimulus_power = power / static_cast<double>(all.averages);
    }
    return points;
}

double gain_db(std::complex<double> response) { return 20.0 * std::log10(std::abs(response)); }

}  // namespace halflsb
