#include "oracle/measure/harmonics.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/measure/sine_columns.hpp"
#include "oracle/measure/sums.hpp"

namespace halflsb {

namespace {

// One frequency of the fit; at half the rate only one of its columns is not zero.
struct Line {
    double f = 0.0;
    bool has_cosine = true, has_sine = true;
    double a = 0.0, b = 0.0;
};

std::vector<Line> lines_of(double fundamental, const std::vector<Harmonic>& harmonics, std::size_t samples) {
    std::vector<Line> lines{{fundamental}};
    for (const Harmonic& harmonic : harmonics) {
        if (harmonic.place != HarmonicPlace::own) continue;
        Line line{harmonic.cycles_per_sample};
        // (-1)^n about the middle of the record: a cosine when a sample stands there, else a sine.
        if (line.f == 0.5) (samples % 2 == 0 ? line.has_cosine : line.has_sine) = false;
        lines.push_back(line);
    }
    return lines;
}

// Even columns (1 and cosines) and odd ones (sines) are orthogonal: two systems of half the size.
struct Systems {
    NormalEquations even, odd;
    std::vector<Line*> cosines, sines;

    static Systems of(std::vector<Line>& lines, std::size_t samples) {
        std::vector<Line*> cosines, sines;
        for (Line& line : lines) {
            if (line.has_cosine) cosines.push_back(&line);
            if (line.has_sine) sines.push_back(&line);
        }
        const std::size_t even = cosines.size() + 1, odd = sines.size();
        std::vector<double> even_products(even * even), odd_products(odd * odd);
        const auto frequency = [&](std::size_t i) { return i == 0 ? 0.0 : cosines[i - 1]->f; };
        for (std::size_t i = 0; i < even; ++i) {
            for (std::size_t j = 0; j < even; ++j) {
                even_products[i * even + j] = 0.5 * (sum_of_turns(frequency(i) - frequency(j), samples) +
                                                     sum_of_turns(frequency(i) + frequency(j), samples));
            }
        }
        for (std::size_t i = 0; i < odd; ++i) {
            for (std::size_t j = 0; j < odd; ++j) {
                odd_products[i * odd + j] = 0.5 * (sum_of_turns(sines[i]->f - sines[j]->f, samples) -
                                                   sum_of_turns(sines[i]->f + sines[j]->f, samples));
            }
        }
        return {NormalEquations(std::move(even_products), even), NormalEquations(std::move(odd_products), odd),
                std::move(cosines), std::move(sines)};
    }
};

void subtract(double f, double a, double b, std::vector<double>& rest) {
    for_each_turn(f, rest.size(), [&](std::size_t n, double cosine, double sine) { rest[n] -= a * cosine + b * sine; });
}

// Fits what is left and takes it off. A second call corrects the first, from the true residual.
void fit_rest(std::vector<Line>& lines, const Systems& systems, double& offset, std::vector<double>& rest) {
    std::vector<double> even{0.0}, odd;
    CompensatedSum ones;
    for (const double sample : rest) ones.add(sample);
    even[0] = ones.value();
    for (const Line& line : lines) {
        const SineProducts products = products_with(line.f, rest);
        if (line.has_cosine) even.push_back(products.cosine);
        if (line.has_sine) odd.push_back(products.sine);
    }
    even = systems.even.solve(std::move(even));
    odd = systems.odd.solve(std::move(odd));
    offset += even[0];
    for (double& sample : rest) sample -= even[0];
    std::vector<double> a(lines.size(), 0.0), b = a;
    for (std::size_t i = 0; i < systems.cosines.size(); ++i) {
        a[static_cast<std::size_t>(systems.cosines[i] - lines.data())] = even[i + 1];
    }
    for (std::size_t i = 0; i < systems.sines.size(); ++i) {
        b[static_cast<std::size_t>(systems.sines[i] - lines.data())] = odd[i];
    }
    for (std::size_t i = 0; i < lines.size(); ++i) {
        lines[i].a += a[i], lines[i].b += b[i];
        subtract(lines[i].f, a[i], b[i], rest);
    }
}

// Mean square of a fitted line, and what noise alone would show.
void set_power(const Line& line, double noise_share, Figure& mean_square, double& noise) {
    const double columns = line.has_cosine && line.has_sine ? 2.0 : 1.0;
    mean_square.value = (line.a * line.a + line.b * line.b) / columns;
    noise = columns * noise_share;
    const double truth = std::max(mean_square.value - noise, 0.0);
    mean_square.standard_uncertainty = std::sqrt(4.0 * noise_share * truth + 2.0 * columns * noise_share * noise_share);
}

}  // namespace

std::vector<Harmonic> folded_harmonics(double cycles_per_sample, int highest, std::size_t samples) {
    std::vector<Harmonic> harmonics;
    // Lines just one bin apart are told apart, whatever the rounding of the multiples.
    const double bin = 1.0 / static_cast<double>(samples), least = (1.0 - 1e-6) * bin;
    for (int order = 2; order <= highest; ++order) {
        Harmonic harmonic;
        harmonic.order = order;
        double& f = harmonic.cycles_per_sample;
        f = std::abs(turns_modulo_1(static_cast<double>(order), cycles_per_sample));
        if (0.5 - f < 0.5 * bin) f = 0.5;
        if (f < least) {
            harmonic.place = HarmonicPlace::on_offset;
        } else if (std::abs(f - cycles_per_sample) < least) {
            harmonic.place = HarmonicPlace::on_fundamental;
        } else {
            for (const Harmonic& earlier : harmonics) {
                if (earlier.place != HarmonicPlace::own || !(std::abs(f - earlier.cycles_per_sample) < least)) continue;
                harmonic.place = HarmonicPlace::on_earlier;
                harmonic.shares_with = earlier.order;
                break;
            }
        }
        harmonics.push_back(harmonic);
    }
    return harmonics;
}

std::optional<HarmonicFit> fit_harmonics(double cycles_per_sample, int highest, std::span<const double> samples) {
    HarmonicFit fit;
    fit.harmonics = folded_harmonics(cycles_per_sample, highest, samples.size());
    std::vector<Line> lines = lines_of(cycles_per_sample, fit.harmonics, samples.size());
    const Systems systems = Systems::of(lines, samples.size());
    fit.columns = 1 + systems.cosines.size() + systems.sines.size();
    if (!systems.even.usable() || !systems.odd.usable() || fit.columns >= samples.size()) return std::nullopt;

    std::vector<double>& rest = fit.without_fundamental;
    rest.assign(samples.begin(), samples.end());
    double offset = 0.0;
    fit_rest(lines, systems, offset, rest);
    fit_rest(lines, systems, offset, rest);
    CompensatedSum squares;
    for (const double sample : rest) squares.add(sample * sample);
    const double length = static_cast<double>(samples.size());
    fit.rest_mean_square = squares.value() / length;
    fit.noise_variance = squares.value() / (length - static_cast<double>(fit.columns));

    const double share = fit.noise_variance / length;
    double unused = 0.0;
    set_power(lines[0], share, fit.mean_square, unused);
    fit.amplitude = std::hypot(lines[0].a, lines[0].b);
    std::size_t next = 1;
    for (Harmonic& harmonic : fit.harmonics) {
        if (harmonic.place != HarmonicPlace::own) continue;
        set_power(lines[next], share, harmonic.mean_square, harmonic.noise_mean_square);
        subtract(lines[next].f, -lines[next].a, -lines[next].b, rest);  // back into the record
        ++next;
    }
    return fit;
}

}  // namespace halflsb
