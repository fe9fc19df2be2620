#include "oracle/filters/recursive_design.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/design_math.hpp"
#include "oracle/filters/exact_sums.hpp"

namespace halflsb {

namespace {

/// s^2 + c1 s + c0, or s + c0 where `first_order`.
struct Factor {
    double c1 = 0.0, c0 = 0.0;
    bool first_order = false;
};

struct Prototype {
    std::vector<Complex> pairs;  ///< one pole of each pair, the one above the real axis
    double real_pole = 0.0;      ///< negative; 0: none, the order is even
    double gain = 1.0;           ///< at zero frequency
};

Prototype prototype_of(const RecursiveDesign& design) {
    Prototype made;
    double across = 1.0, along = 1.0;  // half-axes of the ellipse on which the poles lie
    if (design.ripple_db > 0.0) {
        // e^2 = 10^(r / 10) - 1 = 2 sqrt(p) sinh(ln(p) / 2) with p = 10^(r / 10): no digit is lost at small ripples.
        const double root = ratio_of_db(design.ripple_db);
        constexpr double log_of_root_per_db = 0.11512925464970229;  // ln(10) / 20
        const double epsilon = std::sqrt(2.0 * root * hyperbolic_sine(design.ripple_db * log_of_root_per_db));
        across = hyperbolic_sine(inverse_hyperbolic_sine(1.0 / epsilon) / design.order);
        along = std::sqrt(1.0 + across * across);
        if (design.order % 2 == 0) made.gain = 1.0 / root;
    }
    for (int k = 1; k <= design.order / 2; ++k) {
        const auto [sine, cosine] = sine_cosine(2.0 * k - 1.0, 4.0 * design.order);
        made.pairs.push_back({-across * sine, along * cosine});
    }
    if (design.order % 2 == 1) made.real_pole = -across;
    return made;
}

Factor pair_at(Complex pole) { return {-2.0 * pole.re, square_of_size(pole), false}; }

// p^2 - 2 u p + centre = 0 for a complex u in the second quadrant: the root of the same sign as u loses no digits, the
// other one is centre / p.
void add_band_pairs(std::vector<Factor>& factors, Complex u, double centre) {
    Complex root = square_root(u * u + Complex{-centre, 0.0});
    if (root.re * u.re + root.im * u.im < 0.0) root = -1.0 * root;
    const Complex larger = u + root;
    factors.push_back(pair_at(larger));
    factors.push_back(pair_at(centre * inverse(larger)));
}

// `low` and `high` are the warped corners, `width` their difference.
std::vector<Factor> factors_of(const Prototype& prototype, ResponseShape shape, double low, double high, double width) {
    std::vector<Factor> factors;
    const double centre = low * high;
    for (const Complex pole : prototype.pairs) {
        const Complex other = {pole.re / square_of_size(pole), pole.im / square_of_size(pole)};  // 1 / conjugate
        if (shape == ResponseShape::low_pass) factors.push_back(pair_at(low * pole));
        if (shape == ResponseShape::high_pass) factors.push_back(pair_at(low * other));
        if (shape == ResponseShape::band_pass) add_band_pairs(factors, 0.5 * width * pole, centre);
        if (shape == ResponseShape::band_stop) add_band_pairs(factors, 0.5 * width * other, centre);
    }
    if (const double real = -prototype.real_pole; real != 0.0) {
        if (shape == ResponseShape::low_pass) factors.push_back({0.0, low * real, true});
        if (shape == ResponseShape::high_pass) factors.push_back({0.0, low / real, true});
        if (shape == ResponseShape::band_pass) factors.push_back({width * real, centre, false});
        if (shape == ResponseShape::band_stop) factors.push_back({width / real, centre, false});
    }
    return factors;
}

struct Poles {
    BiquadSection section;  ///< a1 and a2
    double scale = 1.0;     ///< a0, by which all was divided
    double radius = 0.0;    ///< of the pole nearest to the circle
    double real_part = 0.0, imaginary_part = 0.0;
    bool first_order = false;
};

Poles transformed(const Factor& factor) {
    Poles poles;
    if (factor.first_order) {
        poles.first_order = true;
        poles.scale = 1.0 + factor.c0;
        poles.section.a1 = (factor.c0 - 1.0) / poles.scale;
        poles.real_part = -poles.section.a1;
        poles.radius = std::fabs(poles.real_part);
        return poles;
    }
    poles.scale = 1.0 + factor.c1 + factor.c0;
    poles.section.a1 = 2.0 * (factor.c0 - 1.0) / poles.scale;
    poles.section.a2 = (1.0 - factor.c1 + factor.c0) / poles.scale;
    const double half = 0.5 * factor.c1, discriminant = half * half - factor.c0;
    if (discriminant < 0.0) {
        poles.radius = std::sqrt(poles.section.a2);
        poles.real_part = -0.5 * poles.section.a1;
        poles.imaginary_part = 2.0 * std::sqrt(-discriminant) / poles.scale;
        return poles;
    }
    // Two real ones: the nearer to the circle is the one whose s is farther from 1 in ratio.
    const double large = half + std::sqrt(discriminant), small = factor.c0 / large;
    const double p = (1.0 - large) / (1.0 + large), q = (1.0 - small) / (1.0 + small);
    poles.real_part = std::fabs(p) > std::fabs(q) ? p : q;
    poles.radius = std::fabs(poles.real_part);
    return poles;
}

// Zeros of a band-pass: `plus` at z = 1 and `minus` at z = -1.
class BandZeros {
public:
    explicit BandZeros(int count) : plus_(count), minus_(count) {}
    void give_two(Poles& poles) {
        const double first = take_nearest(poles), second = take_nearest(poles);
        poles.section.b0 = 1.0;
        poles.section.b1 = -(first + second);
        poles.section.b2 = first * second;
    }

private:
    double take_nearest(const Poles& poles) {
        const bool near_plus = poles.real_part >= 0.0;
        int& nearest = near_plus ? plus_ : minus_;
        int& other = near_plus ? minus_ : plus_;
        if (nearest > 0) {
            --nearest;
            return near_plus ? 1.0 : -1.0;
        }
        --other;
        return near_plus ? -1.0 : 1.0;
    }
    int plus_, minus_;
};

void give_zeros(std::vector<Poles>& all, const RecursiveDesign& design, double centre) {
    if (design.shape == ResponseShape::band_pass) {
        BandZeros zeros(design.order);
        for (std::size_t i = all.size(); i-- > 0;) zeros.give_two(all[i]);
        return;
    }
    for (Poles& poles : all) {
        BiquadSection& s = poles.section;
        const double sign = design.shape == ResponseShape::high_pass ? -1.0 : 1.0;
        s.b0 = 1.0;
        s.b1 = poles.first_order ? sign : 2.0 * sign;
        s.b2 = poles.first_order ? 0.0 : 1.0;
        // s^2 + centre in z: zeros on the circle at the centre of the band.
        if (design.shape == ResponseShape::band_stop) s.b1 = 2.0 * (centre - 1.0) / (1.0 + centre);
    }
}

// The factor that gives the sections, whose b0 is 1 so far, the gain of the prototype.
double gain_of(const std::vector<Poles>& all, const RecursiveDesign& design, const Prototype& prototype, double centre,
               double width) {
    double gain = prototype.gain;
    for (const Poles& poles : all) {
        const double share = poles.first_order ? 2.0 : 4.0;
        if (design.shape == ResponseShape::low_pass) {
            gain *= sum_of_three(1.0, poles.section.a1, poles.section.a2) / share;
        } else if (design.shape == ResponseShape::high_pass) {
            gain *= sum_of_three(1.0, -poles.section.a1, poles.section.a2) / share;
        } else if (design.shape == ResponseShape::band_stop) {
            gain *= (1.0 + centre) / poles.scale;
        } else {
            gain /= poles.scale;
        }
    }
    if (design.shape == ResponseShape::band_pass) {
        // The prototype is the product of -pole / (s - pole); s - pole becomes (s^2 + ...) / (width s).
        for (const Complex pole : prototype.pairs) gain *= width * width * square_of_size(pole);
        if (prototype.real_pole != 0.0) gain *= width * -prototype.real_pole;
    }
    return gain;
}

}  // namespace

std::vector<BiquadSection> designed_sections(const RecursiveDesign& design) {
    const bool is_band = design.shape == ResponseShape::band_pass || design.shape == ResponseShape::band_stop;
    const double low = warped(design.lower_hz, design.rate_hz);
    const double high = is_band ? warped(design.upper_hz, design.rate_hz) : low;
    // tan a - tan b = sin(a - b) / (cos a cos b), which does not cancel in a narrow band.
    const double width = !is_band ? 0.0
                                  : sine_cosine(design.upper_hz - design.lower_hz, 2.0 * design.rate_hz).sine /
                                        (sine_cosine(design.upper_hz, 2.0 * design.rate_hz).cosine *
                                         sine_cosine(design.lower_hz, 2.0 * design.rate_hz).cosine);
    const Prototype prototype = prototype_of(design);
    std::vector<Poles> all;
    for (const Factor& factor : factors_of(prototype, design.shape, low, high, width)) {
        all.push_back(transformed(factor));
    }
    // Of two pairs as near to the circle, the one at the lower frequency comes last. Radii are compared to 1e-12, so
    // that rounding does not order what is symmetric.
    std::stable_sort(all.begin(), all.end(), [](const Poles& a, const Poles& b) { return a.radius < b.radius; });
    for (std::size_t i = 1; i < all.size(); ++i) {
        if (all[i].radius - all[i - 1].radius < 1e-12 && all[i - 1].real_part > all[i].real_part)
            std::swap(all[i - 1], all[i]);
    }
    give_zeros(all, design, low * high);
    const double gain = gain_of(all, design, prototype, low * high, width);
    std::vector<BiquadSection> sections;
    for (const Poles& poles : all) sections.push_back(poles.section);
    for (double* b : {&sections[0].b0, &sections[0].b1, &sections[0].b2}) *b *= gain;
    return sections;
}

}  // namespace halflsb
