#include "stimuli/exact_math.hpp"

#include <array>
#include <bit>
#include <cassert>
#include <cstdint>

namespace halflsb {

namespace {

constexpr Uint128 join(std::uint64_t high, std::uint64_t low) { return Uint128{high} << 64 | low; }

constexpr Uint128 one_eighth_turn = Uint128{1} << 125;
constexpr Uint128 quarter_pi = join(0xc90fdaa22168c234, 0xc4c6628b80dc1cd1);  // units of 2^-128
constexpr Uint128 log_of_two = join(0xb17217f7d1cf79ab, 0xc9e3b39803f2f6af);  // units of 2^-128

/// An angle as the sum of two doubles, |low| < 2^-53.
struct Angle {
    double high;
    double low;
};

/// `eighth` is at most one_eighth_turn, so the angle is at most pi/4.
Angle angle_of(Uint128 eighth) {
    const Uint128 radians = high_product(eighth << 2, quarter_pi);  // units of 2^-127
    constexpr std::uint64_t dropped = 0x3ff;                        // the upper 63 bits less 10 fit a double
    const auto upper = static_cast<std::int64_t>(static_cast<std::uint64_t>(radians >> 64) & ~dropped);
    const Uint128 rest = radians & ((Uint128{dropped} << 64) | ~std::uint64_t{0});
    const auto lower = static_cast<std::int64_t>(static_cast<std::uint64_t>(rest >> 11));
    return {static_cast<double>(upper) * 0x1p-63, static_cast<double>(lower) * 0x1p-116};
}

/// A square as the sum of two doubles, exact (T. J. Dekker, 1971, with the splitting of G. W. Veltkamp).
struct Square {
    double high;
    double low;
};

Square square_of(double x) {
    const double scaled = x * 134217729.0;  // 2^27 + 1
    const double upper = scaled - (scaled - x);
    const double lower = x - upper;
    const double high = x * x;
    return {high, ((upper * upper - high) + 2.0 * upper * lower) + lower * lower};
}

/// sin(high + low) = sin(high) + low cos(high).
double sine_series(Angle angle) {
    const double x = angle.high;
    const Square square = square_of(x);
    const double z = square.high;
    double sum = 1.0 / 355687428096000.0;  // 1/17!
    sum = sum * z - 1.0 / 1307674368000.0;
    sum = sum * z + 1.0 / 6227020800.0;
    sum = sum * z - 1.0 / 39916800.0;
    sum = sum * z + 1.0 / 362880.0;
    sum = sum * z - 1.0 / 5040.0;
    sum = sum * z + 1.0 / 120.0;
    // The cube carries the largest rounding, so it is divided as a whole and its lost bits are added.
    const double cube = z * x;
    const double small = cube * z * sum + (angle.low * (1.0 - 0.5 * z) - square.low * x / 6.0);
    return x + (small - cube / 6.0);
}

/// cos(high + low) = cos(high) - low sin(high).
double cosine_series(Angle angle) {
    const double x = angle.high;
    const Square square = square_of(x);
    const double z = square.high;
    double sum = -1.0 / 6402373705728000.0;  // 1/18!
    sum = sum * z + 1.0 / 20922789888000.0;
    sum = sum * z - 1.0 / 87178291200.0;
    sum = sum * z + 1.0 / 479001600.0;
    sum = sum * z - 1.0 / 3628800.0;
    sum = sum * z + 1.0 / 40320.0;
    sum = sum * z - 1.0 / 720.0;
    sum = sum * z + 1.0 / 24.0;
    const double half_square = 0.5 * z;
    const double near = 1.0 - half_square;
    const double lost = (1.0 - near) - half_square;  // exact: what the subtraction above rounded away
    return near + (lost + (z * z * sum - (0.5 * square.low + x * angle.low)));
}

}  // namespace

double sine_of_turns(TurnFraction phase) {
    const auto eighth = static_cast<unsigned>(phase >> 125);
    Uint128 within = phase & (one_eighth_turn - 1);
    if ((eighth & 1U) != 0) within = one_eighth_turn - within;
    const Angle angle = angle_of(within);
    const unsigned quadrant_half = eighth & 3U;
    const double size = quadrant_half == 0 || quadrant_half == 3 ? sine_series(angle) : cosine_series(angle);
    return eighth < 4 ? size : -size;
}

double natural_log(double value) {
    constexpr double log_of_two_high = 0x1.62e42fefa38p-1;  // 42 bits, so that k times it is exact
    constexpr double log_of_two_low = 0x1.ef35793c7673p-45;
    constexpr std::uint64_t mantissa_bits = (std::uint64_t{1} << 52) - 1;
    const auto bits = std::bit_cast<std::uint64_t>(value);
    assert(value >= 0x1p-1022);
    int k = static_cast<int>(bits >> 52) - 1023;
    double m = std::bit_cast<double>((bits & mantissa_bits) | std::bit_cast<std::uint64_t>(1.0));
    if (m > 0x1.6a09e667f3bcdp0) {  // sqrt(2)
        m *= 0.5;
        ++k;
    }
    const double f = m - 1.0;
    const double s = f / (2.0 + f);
    const double z = s * s;
    double sum = 2.0 / 23.0;
    sum = sum * z + 2.0 / 21.0;
    sum = sum * z + 2.0 / 19.0;
    sum = sum * z + 2.0 / 17.0;
    sum = sum * z + 2.0 / 15.0;
    sum = sum * z + 2.0 / 13.0;
    sum = sum * z + 2.0 / 11.0;
    sum = sum * z + 2.0 / 9.0;
    sum = sum * z + 2.0 / 7.0;
    sum = sum * z + 2.0 / 5.0;
    sum = sum * z + 2.0 / 3.0;
    // log(1 + f) = f - s (f - z sum), and s f = f^2/2 - s f^2/2: the large part is exact in f.
    const double half_square = 0.5 * f * f;
    const double correction = s * (half_square + z * sum);
    const auto power = static_cast<double>(k);
    return power * log_of_two_high - ((half_square - (correction + power * log_of_two_low)) - f);
}

namespace {

constexpr Uint128 all_ones = ~Uint128{0};

/// e^x - 1 for x below 2^-16, both in units of 2^-128; the next term is below 2^-148.
Uint128 exp_minus_one(Uint128 x) {
    Uint128 sum = all_ones / 5040;
    sum = all_ones / 720 + high_product(x, sum);
    sum = all_ones / 120 + high_product(x, sum);
    sum = all_ones / 24 + high_product(x, sum);
    sum = all_ones / 6 + high_product(x, sum);
    sum = all_ones / 2 + high_product(x, sum);
    return x + high_product(x, high_product(x, sum));
}

/// e^x for x below ln 2, x in units of 2^-128, the result in units of 2^-127: the whole Taylor series
/// by Horner's rule, 40 terms (ln 2 ^ 40 / 40! is below 2^-180).
Uint128 exp_by_series(Uint128 x) {
    Uint128 sum = 0;  // units of 2^-127
    for (unsigned k = 40; k >= 1; --k) sum = high_product(x, (Uint128{1} << 127) + sum) / k;
    return (Uint128{1} << 127) + sum;
}

/// 2^(i / 2^8) and 2^(i / 2^16), in units of 2^-127.
struct PowerTables {
    std::array<Uint128, 256> coarse;
    std::array<Uint128, 256> fine;
};

const PowerTables& power_tables() {
    static const PowerTables tables = [] {
        PowerTables filled{};
        for (unsigned i = 0; i < 256; ++i) {
            filled.coarse[i] = exp_by_series(high_product(Uint128{i} << 120, log_of_two));
            filled.fine[i] = exp_by_series(high_product(Uint128{i} << 112, log_of_two));
        }
        return filled;
    }();
    return tables;
}

}  // namespace

Uint128 exp2_of_fraction(Uint128 fraction) {
    static const PowerTables& tables = power_tables();
    const Uint128 coarse = tables.coarse[static_cast<std::size_t>(fraction >> 120)];
    const Uint128 fine = tables.fine[static_cast<std::size_t>(fraction >> 112) & 0xff];
    // Units of 2^-127, below 2 as the whole product is.
    const Uint128 power = high_product(coarse, fine) << 1;
    const Uint128 rest = fraction & ((Uint128{1} << 112) - 1);
    return power + high_product(power, exp_minus_one(high_product(rest, log_of_two)));
}

Wide natural_log_of_two() { return {log_of_two, -128}; }

Wide natural_log(const Wide& ratio) {
    // ratio = m 2^k with m in [1, 2); ln m = 2 atanh(z), z = (m - 1) / (m + 1) below 1/3.
    const int k = ratio.exponent + 127;
    assert(k >= 0);
    const Uint128 above_one = ratio.mantissa - (Uint128{1} << 127);  // m - 1, units of 2^-127
    const Wide z_wide = wide_scaled(above_one, -127) / wide_scaled((ratio.mantissa >> 1) + (Uint128{1} << 126), -126);
    const Uint128 z = split({0, z_wide.mantissa}, -z_wide.exponent).fraction;
    const Uint128 square = high_product(z, z);
    // Horner over 1/(2j + 1); (1/3)^82 is below 2^-129.
    Uint128 sum = 0;
    for (unsigned j = 40; j >= 1; --j) sum = high_product(square, all_ones / (2 * j + 1) + sum);
    const Uint128 half_log = z + high_product(z, sum);  // units of 2^-128, below 0.347
    const Uint128 log_of_m = half_log << 1;
    // k ln 2 needs up to 11 bits above the point: units of 2^-116.
    if (k == 0) return wide_scaled(log_of_m, -128);
    const Uint256 whole = full_product(log_of_two, static_cast<Uint128>(static_cast<unsigned>(k)));
    const Uint128 scaled = (whole.high << 116 | whole.low >> 12) + (log_of_m >> 12);
    return wide_scaled(scaled, -116);
}

}  // namespace halflsb
