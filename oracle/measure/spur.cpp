#include "oracle/measure/spur.hpp"

#include <bit>
#include <cmath>
#include <kissfft/kissfft.hh>
#include <numbers>
#include <span>

#include "oracle/measure/sine_columns.hpp"

namespace halflsb {

namespace {

constexpr double main_lobe_bins = 4.0;
constexpr double noise_bandwidth_bins = 2.00435;  // sum w^2 N / (sum w)^2 of the coefficients below
constexpr double a0 = 0.35875, a1 = 0.48829, a2 = 0.14128, a3 = 0.01168;

// Periodic; the sum of its weights is a0 N.
void weigh(std::vector<double>& samples) {
    const double length = static_cast<double>(samples.size());
    for (std::size_t n = 0; n < samples.size(); ++n) {
        const double cosine = std::cos(2.0 * std::numbers::pi * static_cast<double>(n) / length);
        const double twice = 2.0 * cosine * cosine - 1.0, thrice = (2.0 * twice - 1.0) * cosine;
        samples[n] *= a0 - a1 * cosine + a2 * twice - a3 * thrice;
    }
}

struct Search {
    double fundamental = 0.0, bin = 0.0;
    bool looks_at(double f) const {
        const double lobe = (main_lobe_bins - 1e-6) * bin;
        return f >= lobe && std::abs(f - fundamental) >= lobe;
    }
    // A line's transform has half its amplitude; at half the rate its image gives the other half.
    double lines(double f) const { return 0.5 - f < main_lobe_bins * bin ? 1.0 : 2.0; }
};

// The frequency of the largest bin that is looked at; 0 when there is none with power.
double largest_bin(const std::vector<double>& padded, const Search& search) {
    const std::size_t length = padded.size();
    std::vector<std::complex<double>> spectrum(length / 2);
    kissfft<double>(length / 2, false).transform_real(padded.data(), spectrum.data());
    double largest = 0.0, found = 0.0;
    for (std::size_t k = 1; k <= length / 2; ++k) {
        const double f = static_cast<double>(k) / static_cast<double>(length);
        if (!search.looks_at(f)) continue;
        // The bin at half the rate stands beside the one at 0.
        const double power = k < length / 2 ? std::norm(spectrum[k]) : spectrum[0].imag() * spectrum[0].imag();
        if (search.lines(f) * power > largest) {
            largest = search.lines(f) * power;
            found = f;
        }
    }
    return found;
}

double power_at(double f, std::span<const double> weighted) {
    const SineProducts products = products_with(f, weighted);
    const double sum = a0 * static_cast<double>(weighted.size());
    return (products.cosine * products.cosine + products.sine * products.sine) / (sum * sum);
}

// The window's main lobe is nearly a Gaussian: the logarithm is nearly a parabola.
double refined(double f, std::span<const double> weighted, double bin) {
    for (const double part : {0.5, 0.1, 0.02}) {
        const double step = part * bin;
        const double below = std::log(power_at(f - step, weighted)), here = std::log(power_at(f, weighted)),
                     above = std::log(power_at(f + step, weighted));
        const double bend = below - 2.0 * here + above;
        if (!(bend < 0.0)) return f;
        f += step * std::fmin(std::fmax(0.5 * (below - above) / bend, -1.0), 1.0);
    }
    return f;
}

}  // namespace

std::optional<Spur> largest_spur(std::vector<double> without_fundamental, double fundamental_cycles_per_sample,
                                 double noise_variance) {
    const std::size_t samples = without_fundamental.size();
    const double length = static_cast<double>(samples);
    const Search search{fundamental_cycles_per_sample, 1.0 / length};
    weigh(without_fundamental);
    without_fundamental.resize(std::bit_ceil(samples), 0.0);
    const std::span<const double> weighted = std::span(without_fundamental).first(samples);
    const double bin_f = largest_bin(without_fundamental, search);
    if (bin_f == 0.0) return std::nullopt;
    Spur spur;
    spur.cycles_per_sample = bin_f;
    if (search.lines(bin_f) == 2.0) {
        const double f = refined(bin_f, weighted, search.bin);
        if (search.looks_at(f) && search.lines(f) == 2.0) spur.cycles_per_sample = f;
    }
    const double lines = search.lines(spur.cycles_per_sample);
    double& power = spur.mean_square.value;
    power = lines * power_at(spur.cycles_per_sample, weighted);

    const double share = noise_variance * noise_bandwidth_bins / length, noise = lines * share;
    spur.is_line = power > noise * std::log(1000.0 * length);
    const double truth = std::fmax(power - noise, 0.0);
    spur.mean_square.standard_uncertainty = spur.is_line ? std::sqrt(4.0 * share * truth + 2.0 * lines * share * share)
                                                         : std::numbers::pi / std::sqrt(6.0) * noise;
    return spur;
}

}  // namespace halflsb
