#include "oracle/measure/series_variance.hpp"

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <vector>

namespace halflsb {

namespace {

using Column = std::vector<double>;

double product(const Column& a, const Column& b, std::span<const double> weights) {
    double sum = 0.0;
    for (std::size_t i = 0; i < a.size(); ++i) sum += weights[i] * a[i] * b[i];
    return sum;
}

// Gram and Schmidt, twice: once leaves what rounding did to nearly dependent columns.
void append_orthonormal(Column column, std::span<const double> weights, std::vector<Column>& basis) {
    for (int pass = 0; pass < 2; ++pass) {
        for (const Column& other : basis) {
            const double share = product(column, other, weights);
            for (std::size_t i = 0; i < column.size(); ++i) column[i] -= share * other[i];
        }
    }
    const double length = std::sqrt(product(column, column, weights));
    for (double& entry : column) entry /= length;
    basis.push_back(std::move(column));
}

}  // namespace

std::optional<SeriesVariance> series_variance(std::span<const double> means, std::span<const double> samples,
                                              FittedCourse fitted) {
    constexpr std::size_t least_blocks = 8, most_projections = 32;
    const std::size_t blocks = means.size();
    if (blocks < least_blocks) return std::nullopt;
    const std::size_t fitted_columns = fitted == FittedCourse::line ? 2 : 1;
    const std::size_t projections = std::min(most_projections, (blocks - fitted_columns) / 2);

    double total = 0.0;
    for (const double count : samples) total += count;
    Column middle(blocks), deviation(blocks);  // of a block, 0 .. 1 over the run; of its mean from the first one
    double before = 0.0;
    for (std::size_t b = 0; b < blocks; ++b) {
        middle[b] = (before + 0.5 * samples[b]) / total;
        before += samples[b];
        deviation[b] = means[b] - means[0];
    }
    std::vector<Column> basis;
    append_orthonormal(Column(blocks, 1.0), samples, basis);
    if (fitted == FittedCourse::line) append_orthonormal(middle, samples, basis);
    double sum = 0.0;
    for (std::size_t k = 0; k < projections; ++k) {
        // Beside a line: its own shape is nearly the first cosine.
        const auto half_cycles = static_cast<double>(k + fitted_columns);
        Column cosine(blocks);
        for (std::size_t b = 0; b < blocks; ++b) cosine[b] = std::cos(std::numbers::pi * half_cycles * middle[b]);
        append_orthonormal(std::move(cosine), samples, basis);
        const double projection = product(deviation, basis.back(), samples);
        sum += projection * projection;
    }
    return SeriesVariance{sum / static_cast<double>(projections), static_cast<int>(projections)};
}

}  // namespace halflsb
