#include "oracle/measure/response.hpp"

#include <cmath>

namespace halflsb {

std::vector<ResponsePoint> ResponseMeasure::value() const {
    const ResponseSums& all = sums();
    std::vector<ResponsePoint> points(all.cycles_per_sample.size());
    for (std::size_t k = 0; k < points.size(); ++k) {
        const BatchSums::Total total = all.sums.total(k);
        points[k].cycles_per_sample = all.cycles_per_sample[k];
        points[k].averages = all.averages;
        points[k].difference = total.ratio();
        if (all.averages > 0) points[k].stimulus_power = total.power / static_cast<double>(all.averages);
    }
    return points;
}

double gain_db(std::complex<double> response) { return 20.0 * std::log10(std::abs(response)); }

}  // namespace halflsb
