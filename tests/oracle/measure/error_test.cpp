#include "oracle/measure/error.hpp"

#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

ErrorFigures figures_of(std::span<const double> reference, std::span<const double> response,
                        std::optional<double> limit = std::nullopt) {
    ErrorMeasure measure = limit ? ErrorMeasure(*limit) : ErrorMeasure();
    measure.add(reference, response);
    return measure.value();
}

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();
constexpr double infinity = std::numeric_limits<double>::infinity();

}  // namespace

TEST_CASE("error: a hand-made record", "[measure]") {
    const std::vector<double> reference{1.0, 2.0, -2.0, 0.0}, response{1.5, 2.0, -3.0, 0.5};
    const auto f = figures_of(reference, response);
    CHECK(f.samples == 4);
    CHECK(f.largest == 1.0);
    CHECK(f.largest_index == 2);
    CHECK(f.rms == std::sqrt(1.5 / 4.0));
    CHECK(f.bias == 0.0);
    CHECK_FALSE(f.identical);
    // 10 lg(9 / 1.5)
    CHECK_THAT(f.snr_db.value(), Catch::WithinAbs(7.781512503836436, 1e-14));
    CHECK((f.first_beyond == -1 && f.beyond == 0));
}

TEST_CASE("error: nothing and one sample", "[measure]") {
    const auto none = figures_of({}, {});
    CHECK((none.samples == 0 && none.largest == 0.0 && none.largest_index == -1 && !none.identical && !none.snr_db));
    const auto one = figures_of(std::vector<double>{2.0}, std::vector<double>{1.75});
    CHECK((one.samples == 1 && one.largest == 0.25 && one.largest_index == 0 && one.rms == 0.25 && one.bias == -0.25));
}

TEST_CASE("error: an exact match is identical and has no SNR", "[measure]") {
    const auto in = noise(1000, 71);
    const auto f = figures_of(in, in, 0.0);
    CHECK((f.identical && !f.snr_db && f.largest == 0.0 && f.rms == 0.0 && f.bias == 0.0));
    CHECK((f.largest_index == 0 && f.first_beyond == -1 && f.beyond == 0));
}

TEST_CASE("error: one differing last bit is not identical", "[measure]") {
    const auto in = noise(1000, 72);
    auto out = in;
    out[700] = std::nextafter(out[700], 2.0);
    const auto f = figures_of(in, out);
    CHECK_FALSE(f.identical);
    CHECK(f.largest_index == 700);
    CHECK(f.largest == out[700] - in[700]);
}

TEST_CASE("error: a silent reference has no SNR", "[measure]") {
    const auto f = figures_of(std::vector<double>(10, 0.0), std::vector<double>(10, 0.1));
    CHECK_FALSE(f.snr_db);
    CHECK_FALSE(f.identical);
}

TEST_CASE("error: the limit itself is within, the next number is beyond", "[measure]") {
    const double limit = 0x1p-15;
    std::vector<double> reference(20, 0.0), response(20, 0.0);
    response[4] = limit;
    response[5] = -limit;
    CHECK(figures_of(reference, response, limit).beyond == 0);
    response[9] = std::nextafter(-limit, -1.0);
    response[12] = std::nextafter(limit, 1.0);
    const auto f = figures_of(reference, response, limit);
    CHECK(f.beyond == 2);
    CHECK(f.first_beyond == 9);
}

TEST_CASE("error: NaN is beyond any limit and spoils largest, rms and bias", "[measure]") {
    const std::vector<double> reference(6, 0.5);
    std::vector<double> response(6, 0.5);
    response[2] = not_a_number;
    response[4] = infinity;
    const auto f = figures_of(reference, response, 1e300);
    CHECK(f.beyond == 2);
    CHECK(f.first_beyond == 2);
    CHECK(std::isnan(f.largest));
    CHECK(f.largest_index == 2);
    CHECK_FALSE(f.identical);
    // "not (value <= limit)" fails for each
    CHECK_FALSE(f.rms <= 1e300);
    CHECK_FALSE(std::fabs(f.bias) <= 1e300);
    CHECK((f.snr_db && !(*f.snr_db >= -1e300)));
}

TEST_CASE("error: a NaN first of all is the largest too", "[measure]") {
    const auto f = figures_of(std::vector<double>{0.0, 0.0}, std::vector<double>{not_a_number, 3.0});
    CHECK(std::isnan(f.largest));
    CHECK(f.largest_index == 0);
}

TEST_CASE("error: infinity passes no limit", "[measure]") {
    const auto f = figures_of(std::vector<double>{0.0, 0.0}, std::vector<double>{infinity, 3.0}, 1.0);
    CHECK((f.largest == infinity && f.beyond == 2));
    CHECK_FALSE(f.rms <= 1e300);  // infinite or NaN
    CHECK_FALSE(std::fabs(f.bias) <= 1e300);
}

TEST_CASE("error: indices start where they are told", "[measure]") {
    ErrorMeasure measure(0.1);
    measure.start_at(1000000000000);
    const std::vector<double> zeros(5, 0.0), off{0.0, 0.0, 0.0, 0.2, 0.3};
    measure.add(zeros, zeros);
    measure.add(zeros, off);
    CHECK(measure.value().first_beyond == 1000000000008);
    CHECK(measure.value().largest_index == 1000000000009);
    CHECK(measure.value().samples == 10);
}

TEST_CASE("error: swapping response and reference negates the bias and keeps the rest", "[measure]") {
    const auto a = noise(5000, 73), b = noise(5000, 74);
    const auto f = figures_of(a, b), g = figures_of(b, a);
    CHECK((f.bias == -g.bias && f.rms == g.rms && f.largest == g.largest && f.largest_index == g.largest_index));
}

TEST_CASE("error: any split gives the same figures, bit for bit", "[measure]") {
    const auto a = noise(20011, 75), b = noise(20011, 76);
    const auto whole = figures_of(a, b, 1.2);
    for (const Split split : every_split) {
        ErrorMeasure measure(1.2);
        for_blocks(split, a.size(), [&](std::size_t first, std::size_t count) {
            measure.add(std::span(a).subspan(first, count), std::span(b).subspan(first, count));
        });
        const auto f = measure.value();
        CHECK((f.rms == whole.rms && f.bias == whole.bias && f.largest == whole.largest && f.snr_db == whole.snr_db));
        CHECK((f.largest_index == whole.largest_index && f.first_beyond == whole.first_beyond &&
               f.beyond == whole.beyond));
    }
}

TEST_CASE("error: a bias far below the samples survives a long record", "[measure]") {
    // 0.1 has no finite binary form; plain summation of 1e6 errors of 1 + 0.1 strays by about 1e-11 of the mean.
    const std::size_t length = 1000000;
    std::vector<double> reference(length), response(length);
    for (std::size_t n = 0; n < length; ++n) {
        reference[n] = n % 2 == 0 ? 1e6 : -1e6;
        response[n] = reference[n] + (n % 2 == 0 ? 1000.0 : -1000.0) + 0x1p-20;
    }
    const auto f = figures_of(reference, response);
    CHECK(f.bias == 0x1p-20);  // each error is exact, and so is their compensated sum
}

TEST_CASE("sums: compensated summation keeps what plain summation loses", "[measure]") {
    CompensatedSum sum;
    for (const double term : {1.0, 1e100, 1.0, -1e100}) sum.add(term);
    CHECK(sum.value() == 2.0);  // Neumaier's example; plain and Kahan's sums give 0
    CompensatedSum tenths;
    for (int n = 0; n < 1000000; ++n) tenths.add(0.1);
    // 10^6 times the double next to 0.1, correctly rounded
    CHECK(tenths.value() == static_cast<double>(1000000.0L * static_cast<long double>(0.1)));
}

TEST_CASE("error: each end of a limit holds by itself", "[measure]") {
    const std::vector<double> reference{0.0, 0.0, 0.0, 0.0, 0.0}, response{-0.75, 0.0, 0.125, 0.25, -1.0};
    ErrorMeasure measure(ErrorEnds{-0.75, 0.125});
    measure.add(std::span(reference).first(2), std::span(response).first(2));
    CHECK((measure.value().lowest == -0.75 && measure.value().highest == 0.0));
    CHECK(measure.value().beyond == 0);
    measure.add(std::span(reference).subspan(2), std::span(response).subspan(2));
    const ErrorFigures f = measure.value();
    CHECK((f.lowest == -1.0 && f.highest == 0.25 && f.largest == 1.0));
    CHECK((f.first_beyond == 3 && f.beyond == 2));
    // Errors that are all of one sign have no other end.
    const std::vector<double> low{-2.0, -1.0};
    ErrorMeasure one_way(ErrorEnds{-2.0, 0.0});
    one_way.add(std::span(reference).first(2), low);
    CHECK((one_way.value().lowest == -2.0 && one_way.value().highest == -1.0 && one_way.value().beyond == 0));
}
