#include <limits>

#include "oracle/filters/stability.hpp"
#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

constexpr long double pi_long = 3.14159265358979323846264338327950288L;

// The definition, sum h[n] e^(-j 2 pi f n), with 64-bit significands.
std::complex<double> transform(const std::vector<double>& h, double f) {
    long double re = 0.0L, im = 0.0L;
    for (std::size_t n = 0; n < h.size(); ++n) {
        const long double turns = std::fmod(static_cast<long double>(f) * static_cast<long double>(n), 1.0L);
        re += static_cast<long double>(h[n]) * std::cos(2.0L * pi_long * turns);
        im -= static_cast<long double>(h[n]) * std::sin(2.0L * pi_long * turns);
    }
    return {static_cast<double>(re), static_cast<double>(im)};
}

}  // namespace

TEST_CASE("response: the closed form is the transform of the impulse response", "[filters]") {
    const FilterChain chains[] = {
        {},
        {stage(MovingAverage{1})},
        {stage(MovingAverage{10})},
        {stage(MovingAverage{1001})},
        {stage(Fir{noise(1, 51)})},
        {stage(Fir{noise(64, 52)})},
        {stage(Fir{noise(257, 57)})},
        {stage(Fir{noise(400, 58)})},
        {stage(Fir{noise(1500, 53)})},
        {stage(BiquadCascade{{cookbook(Shape::low_pass, 0.02, 0.7), cookbook(Shape::notch, 0.1, 3.0)}})},
        {stage(BiquadCascade{{cookbook(Shape::high_pass, 0.47, 1.5)}}), stage(MovingAverage{4}),
         stage(Fir{{1.0, 0.5}})},
    };
    for (const FilterChain& chain : chains) {
        const auto h = impulse_response(chain, 4000);
        const double peak = l1_norm(chain);
        for (const double f : {0.0, 1e-5, 0.01, 0.1, 0.2, 0.25, 0.3, 0.4999, 0.5}) {
            const auto closed = response_at(chain, f), summed = transform(h, f);
            INFO("f " << f << ", closed " << closed << ", summed " << summed);
            // About four roundings of the largest sum there can be, and those of h (1e-14 of it for the cascades).
            CHECK(std::abs(closed - summed) <= 2e-14 * peak);
        }
    }
}

TEST_CASE("response: a moving average has its exact nulls, 1 at zero frequency and linear phase", "[filters]") {
    for (const int points : {2, 3, 4, 10, 16, 1000, 65536}) {
        const FilterChain chain{stage(MovingAverage{points})};
        CHECK(response_at(chain, 0.0) == std::complex<double>(1.0, 0.0));
        for (int k = 1; k <= points / 2; k += 1 + points / 37) {
            // The null lies at k / M, which double rounds by up to 2^-54: the slope there is at most pi.
            CHECK(std::abs(response_at(chain, static_cast<double>(k) / points)) < 4e-16);
        }
        // Group delay (M - 1) / 2: phase -pi f (M - 1) below the first null.
        const double f = 0.4 / points;
        CHECK_THAT(std::arg(response_at(chain, f)),
                   Catch::WithinAbs(-3.14159265358979323846 * f * (points - 1), 1e-15));
    }
}

TEST_CASE("response: a symmetric FIR has linear phase of (N - 1) / 2 samples", "[filters]") {
    auto half = noise(20, 54);
    std::vector<double> taps(half);
    taps.insert(taps.end(), half.rbegin(), half.rend());
    for (const double f : {0.013, 0.21, 0.34, 0.4}) {
        const double turns = f * 0.5 * 39.0;
        const auto real = response_at({stage(Fir{taps})}, f) * std::polar(1.0, 2.0 * 3.14159265358979323846 * turns);
        CHECK(std::fabs(real.imag()) < 1e-14);
    }
}

TEST_CASE("response: biquads keep their digits near zero frequency and near half the rate", "[filters]") {
    const double edge = GENERATE(0.0001, 0.4999);
    const auto shape = GENERATE(Shape::low_pass, Shape::high_pass, Shape::notch);
    const BiquadSection s = cookbook(shape, edge, 0.7);
    for (const double part : {0.0, 0.001, 0.1, 0.7, 1.1, 3.0}) {
        const double f = edge < 0.25 ? edge * part : 0.5 - (0.5 - edge) * part;
        using Long = std::complex<long double>;
        const Long z1 = std::polar(1.0L, -2.0L * pi_long * static_cast<long double>(f)), z2 = z1 * z1;
        const auto poly = [&](double p0, double p1, double p2) {
            return static_cast<long double>(p0) + static_cast<long double>(p1) * z1 + static_cast<long double>(p2) * z2;
        };
        const Long exact = poly(s.b0, s.b1, s.b2) / poly(1.0, s.a1, s.a2);
        const auto got = response_at({stage(BiquadCascade{{s}})}, f);
        const auto deviation = std::abs(Long(got.real(), got.imag()) - exact);
        // The long evaluation loses 2^-64 / (2 pi 1e-4)^2 = 1.4e-13 to cancellation, which dominates.
        CHECK(static_cast<double>(deviation) < 5e-13);
    }
}

TEST_CASE("pole radius: real, double and complex poles", "[filters]") {
    CHECK(pole_radius({1, 0, 0, 0, 0}) == 0.0);
    CHECK(pole_radius({1, 0, 0, -0.5, 0}) == 0.5);
    CHECK(pole_radius({1, 0, 0, -1.5, 0.5}) == 1.0);  // poles 1 and 0.5
    CHECK(pole_radius({1, 0, 0, 1.0, 0.25}) == 0.5);  // twice -0.5
    CHECK(pole_radius({1, 0, 0, 0, 0.81}) == 0.9);    // +- 0.9 j
    CHECK(pole_radius({1, 0, 0, 0, -0.81}) == 0.9);   // +- 0.9
    CHECK(largest_pole_radius({}) == 0.0);
    CHECK(largest_pole_radius({stage(MovingAverage{5}), stage(Fir{{1.0}})}) == 0.0);
    CHECK(largest_pole_radius({stage(BiquadCascade{{{1, 0, 0, -0.5, 0}, {1, 0, 0, 0, 0.81}, {1, 0, 0, 0.1, 0}}})}) ==
          0.9);
}

TEST_CASE("stability: both sides of each edge of the triangle, to the last bit", "[filters]") {
    const auto with = [](double a1, double a2) { return is_stable({1, 0, 0, a1, a2}); };
    const double below_one = std::nextafter(1.0, 0.0), below_two = std::nextafter(2.0, 0.0);
    CHECK_FALSE(with(0.0, 1.0));
    CHECK(with(0.0, below_one));
    CHECK_FALSE(with(0.0, -1.0));
    CHECK(with(0.0, -below_one));
    CHECK_FALSE(with(-1.0, 0.0));
    CHECK(with(-below_one, 0.0));
    CHECK_FALSE(with(2.0, 1.0));
    CHECK_FALSE(with(-2.0, below_one));
    CHECK(with(-below_two, below_one));  // 2 - 2^-52 against 2 - 2^-53, which a rounded 1 + a2 makes 2
    CHECK_FALSE(with(-below_two, std::nextafter(below_one, 0.0)));  // equal
    CHECK_FALSE(with(below_two, std::nextafter(below_one, 0.0)));
    CHECK_FALSE(with(-1.5, 0.5));
    CHECK(with(-1.5, std::nextafter(0.5, 1.0)));
    CHECK_FALSE(with(1.5, 0.5));
    CHECK_FALSE(with(0.25, -0.75));
    CHECK(with(std::nextafter(0.25, 0.0), -0.75));
    CHECK_FALSE(with(1e-300, -1.0));
    const double nan = std::numeric_limits<double>::quiet_NaN();
    CHECK_FALSE(with(nan, 0.0));
    CHECK_FALSE(with(0.0, nan));
}

TEST_CASE("l1 norm: closed forms", "[filters]") {
    CHECK(l1_norm({}) == 1.0);
    CHECK_THAT(l1_norm({stage(MovingAverage{16})}), Catch::WithinULP(1.0, 2));
    for (const double a : {0.5, 0.9, 0.99, -0.9, 0.99999}) {
        // 1 / (1 - |a|), short of the tail and of the rounding of a itself
        const double norm = l1_norm({stage(BiquadCascade{{{1, 0, 0, -a, 0}}})});
        CHECK_THAT(norm * (1.0 - std::fabs(a)), Catch::WithinAbs(1.0, 3e-12));
    }
    // A delay before the feedback must not be taken for the end: 3000 leading zeros.
    std::vector<double> delay(3000, 0.0);
    delay.back() = 1.0;
    CHECK_THAT(l1_norm({stage(BiquadCascade{{{1, 0, 0, -0.5, 0}}}), stage(Fir{delay})}), Catch::WithinAbs(2.0, 1e-11));
    // A fast mode that hides a slow one of a millionth of it: h = 0.1^n + 1e-6 0.99^n, L1 = 1/0.9 + 1e-4.
    const BiquadCascade hidden{{{1.0 + 1e-6, -0.99 - 1e-7, 0.0, -1.09, 0.099}}};
    CHECK_THAT(l1_norm({stage(hidden)}), Catch::WithinRel(1.0 / 0.9 + 1e-4, 2e-12));
    // Eight equal poles: h rises for 70 samples before it decays; all terms positive, so L1 = 10^8.
    const BiquadCascade repeated{
        {{1, 0, 0, -1.8, 0.81}, {1, 0, 0, -1.8, 0.81}, {1, 0, 0, -1.8, 0.81}, {1, 0, 0, -1.8, 0.81}}};
    CHECK_THAT(l1_norm({stage(repeated)}), Catch::WithinRel(1e8, 1e-11));
}

TEST_CASE("impulse response: as long as asked", "[filters]") {
    CHECK(impulse_response({stage(MovingAverage{4})}, 0).empty());
    CHECK(impulse_response({stage(MovingAverage{4})}, 6) == std::vector<double>{0.25, 0.25, 0.25, 0.25, 0.0, 0.0});
}
