#include "oracle/arithmetic/rounding_error.hpp"

#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;
using Catch::Matchers::WithinAbs;

namespace {

constexpr Rounding every_rounding[] = {Rounding::floor, Rounding::toward_zero, Rounding::half_up, Rounding::half_away,
                                       Rounding::half_even};

/// num / den rounded, in whole numbers alone.
std::int64_t rounded(std::int64_t num, std::int64_t den, Rounding rounding) {
    const auto floored = [](std::int64_t a, std::int64_t b) { return a / b - (a % b != 0 && a < 0 ? 1 : 0); };
    const std::int64_t below = floored(num, den), twice = 2 * (num - below * den);
    switch (rounding) {
        case Rounding::floor:
            return below;
        case Rounding::toward_zero:
            return num / den;
        case Rounding::half_up:
            return floored(2 * num + den, 2 * den);
        case Rounding::half_away:
            return num < 0 ? -floored(-2 * num + den, 2 * den) : floored(2 * num + den, 2 * den);
        case Rounding::half_even:
            if (twice == den) return below % 2 == 0 ? below : below + 1;
            return twice > den ? below + 1 : below;
    }
    return 0;
}

struct Counted {
    double lowest = 0.0, highest = 0.0, mean = 0.0, variance = 0.0;
};

Counted counted(Rounding rounding, std::int64_t parts, std::int64_t first, std::int64_t last) {
    Counted result;
    double sum = 0.0, squares = 0.0;
    for (std::int64_t n = first; n <= last; ++n) {
        const double e = static_cast<double>(rounded(n, parts, rounding) * parts - n) / static_cast<double>(parts);
        result.lowest = std::min(result.lowest, e);
        result.highest = std::max(result.highest, e);
        sum += e;
        squares += e * e;
    }
    const auto count = static_cast<double>(last - first + 1);
    result.mean = sum / count;
    result.variance = squares / count - result.mean * result.mean;
    return result;
}

}  // namespace

TEST_CASE("rounding error: the ends are those that some number attains", "[arithmetic]") {
    Random random(71);
    INFO("seed 71");
    for (int trial = 0; trial < 4000; ++trial) {
        const std::int64_t parts = random.whole(1, trial % 2 == 0 ? 12 : 200), span = random.whole(0, 5 * parts);
        const std::int64_t first = random.whole(-6 * parts, 6 * parts), last = first + span;
        const auto p = static_cast<double>(parts);
        for (const Rounding rounding : every_rounding) {
            const RoundingError error =
                rounding_error(rounding, {p, static_cast<double>(first) / p, static_cast<double>(last) / p});
            const Counted expected = counted(rounding, parts, first, last);
            INFO(name_of(rounding) << ", parts " << parts << ", from " << first << " to " << last);
            REQUIRE_THAT(error.lowest, WithinAbs(expected.lowest, 1e-12));
            REQUIRE_THAT(error.highest, WithinAbs(expected.highest, 1e-12));
        }
    }
}

TEST_CASE("rounding error: a range far from zero has the errors of its remainders", "[arithmetic]") {
    for (const Rounding rounding : every_rounding) {
        for (const double far : {1e6, -1e6}) {
            const RoundingError error = rounding_error(rounding, {8.0, far + 0.25, far + 0.375});
            const double end =
                round_to_whole(0.25 + (far < 0 ? -16.0 : 16.0), rounding) - (0.25 + (far < 0 ? -16.0 : 16.0));
            const double other =
                round_to_whole(0.375 + (far < 0 ? -16.0 : 16.0), rounding) - (0.375 + (far < 0 ? -16.0 : 16.0));
            CHECK(error.lowest == std::min({0.0, end, other}));
            CHECK(error.highest == std::max({0.0, end, other}));
        }
    }
}

// Counted over four periods on each side of zero; the figures of a requantiser, requantiser-discrete.csv: a half-up of
// parts remainders has the mean 1 / (2 parts) and the variance (1 - parts^-2) / 12.
TEST_CASE("rounding error: mean and variance are those of all remainders", "[arithmetic]") {
    for (const std::int64_t parts : {1, 2, 3, 4, 7, 10, 16, 256}) {
        const auto p = static_cast<double>(parts);
        for (const Rounding rounding : every_rounding) {
            const RoundingError error = rounding_error(rounding, {p});
            const Counted above = counted(rounding, parts, 8 * parts, 16 * parts - 1);
            const Counted below = counted(rounding, parts, -16 * parts, -8 * parts - 1);
            INFO(name_of(rounding) << ", parts " << parts);
            CHECK_THAT(std::min(above.mean, below.mean), WithinAbs(error.mean_lowest, 1e-12));
            CHECK_THAT(std::max(above.mean, below.mean), WithinAbs(error.mean_highest, 1e-12));
            CHECK_THAT(above.variance, WithinAbs(error.variance, 1e-12));
            CHECK(error.mean_varies == (error.mean_lowest != error.mean_highest));
        }
    }
    CHECK(rounding_error(Rounding::half_up, {256.0}).mean_highest == 1.0 / 512.0);
    CHECK(rounding_error(Rounding::half_up, {256.0}).variance == (1.0 - 1.0 / 65536.0) / 12.0);
}

// Even words alone: the multiples of 2 / parts; with an odd remainder that is carried, those between them. Any share of
// them beside all multiples.
TEST_CASE("rounding error: of words that lean to even, moments hold for any share of them", "[arithmetic]") {
    const auto every_other = [](Rounding rounding, std::int64_t parts, std::int64_t first) {
        Counted result;
        double sum = 0.0, squares = 0.0, count = 0.0;
        for (std::int64_t n = first; n < first + 8 * parts; n += 2, count += 1.0) {
            const double e = static_cast<double>(rounded(n, parts, rounding) * parts - n) / static_cast<double>(parts);
            sum += e;
            squares += e * e;
        }
        result.mean = sum / count;
        result.variance = squares / count;  // about 0
        return result;
    };
    for (const std::int64_t parts : {2, 4, 6, 8, 10, 16, 256}) {
        for (const Rounding rounding : every_rounding) {
            for (const bool carries : {false, true}) {
                RoundedNumbers numbers{static_cast<double>(parts)};
                numbers.may_lean_to_even = true;
                numbers.carries = carries;
                const RoundingError error = rounding_error(rounding, numbers);
                INFO(name_of(rounding) << ", parts " << parts << (carries ? ", carries" : ""));
                for (const std::int64_t sign : {1, -1}) {
                    const std::int64_t first = sign * 8 * parts - (sign < 0 ? 8 * parts : 0);
                    const Counted even = every_other(rounding, parts, first),
                                  odd = every_other(rounding, parts, first + 1);
                    for (const double share : {0.0, 0.25, 0.5, 0.75, 1.0}) {
                        if (!carries && share < 0.5) continue;
                        const double mean = share * even.mean + (1.0 - share) * odd.mean;
                        const double power = share * even.variance + (1.0 - share) * odd.variance;
                        CHECK(mean >= error.mean_lowest - 1e-12);
                        CHECK(mean <= error.mean_highest + 1e-12);
                        CHECK(power - mean * mean <= error.variance + 1e-12);
                    }
                }
            }
        }
    }
    RoundedNumbers ties{2.0};
    ties.may_lean_to_even = ties.carries = true;
    CHECK(rounding_error(Rounding::half_even, ties).variance == 0.25);
}

TEST_CASE("rounding error: of a rounding that nobody said, and of real numbers", "[arithmetic]") {
    const RoundingError any = rounding_error(std::nullopt, {});
    CHECK((any.lowest == -1.0 && any.highest == 0.5 && any.mean_lowest == -0.5 && any.mean_highest == 0.25));
    CHECK_FALSE(any.mean_varies);
    const double infinite = std::numeric_limits<double>::infinity();
    CHECK(rounding_error(std::nullopt, {infinite}).mean_highest == 0.0);
    CHECK(rounding_error(std::nullopt, {infinite, -8.0, 8.0, 16.0}).mean_highest == 1.0 / 32.0);
    for (const Rounding rounding : every_rounding) {
        const RoundingError fine = rounding_error(rounding, {0x1p40}), real = rounding_error(rounding, {infinite});
        CHECK((fine.lowest >= real.lowest && fine.highest <= real.highest));
        CHECK_THAT(fine.lowest, WithinAbs(real.lowest, 0x1p-39));
        CHECK_THAT(fine.highest, WithinAbs(real.highest, 0x1p-39));
        CHECK_THAT(fine.mean_lowest, WithinAbs(real.mean_lowest, 0x1p-39));
        CHECK_THAT(fine.variance, WithinAbs(real.variance, 0x1p-39));
    }
}

TEST_CASE("rounding error: of a rounding that nobody said it holds for every constant that is added", "[arithmetic]") {
    for (const int parts : {2, 3, 4, 10, 16, 1000}) {
        const RoundingError any = rounding_error(std::nullopt, {static_cast<double>(parts)});
        double highest_mean = -1.0;
        // floor(x + c), c = k / (4 parts) up to 1/2; between two of them the sums are the same or in between.
        for (int k = 0; k <= 2 * parts; ++k) {
            double sum = 0.0;
            for (int remainder = 0; remainder < parts; ++remainder) {
                const int whole = (4 * remainder + k) / (4 * parts);
                sum += whole - static_cast<double>(remainder) / parts;
            }
            CHECK(sum / parts >= any.mean_lowest);
            CHECK(sum / parts <= any.mean_highest + 1e-12);
            highest_mean = std::max(highest_mean, sum / parts);
        }
        if (parts % 2 == 0) CHECK_THAT(highest_mean, WithinAbs(any.mean_highest, 1e-12));
    }
}

TEST_CASE("rounding error: subtracted it is turned round, added it adds", "[arithmetic]") {
    const RoundingError floored = rounding_error(Rounding::floor, {4.0}), turned = floored.times(-2.0);
    CHECK((floored.lowest == -0.75 && floored.highest == 0.0 && floored.mean_lowest == -0.375));
    CHECK((turned.lowest == 0.0 && turned.highest == 1.5 && turned.mean_highest == 0.75));
    CHECK(turned.variance == 4.0 * floored.variance);
    const RoundingError both = floored + turned;
    CHECK((both.lowest == -0.75 && both.highest == 1.5 && both.variance == 5.0 * floored.variance));
    CHECK(both.largest() == 1.5);
    CHECK(floored.largest() == 0.75);
}
