#include "oracle/measure/lag.hpp"

#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

LagFigures figures_of(std::span<const double> reference, std::span<const double> response, int window,
                      int expected = 0) {
    LagMeasure measure(window, expected);
    measure.add(reference, response);
    return measure.value();
}

std::vector<double> delayed(const std::vector<double>& in, int lag) {
    std::vector<double> out(in.size(), 0.0);
    const auto length = static_cast<std::ptrdiff_t>(in.size());
    for (std::ptrdiff_t n = 0; n < length; ++n) {
        if (n - lag >= 0 && n - lag < length) out[static_cast<std::size_t>(n)] = in[static_cast<std::size_t>(n - lag)];
    }
    return out;
}

// The definition, term by term.
std::vector<long double> by_definition(const std::vector<double>& r, const std::vector<double>& y, int window) {
    std::vector<long double> sums;
    for (int k = -window; k <= window; ++k) {
        long double sum = 0.0L;
        for (std::ptrdiff_t n = 0; n <= static_cast<std::ptrdiff_t>(r.size()) - 1 - window; ++n) {
            const double then = n - k >= 0 ? r[static_cast<std::size_t>(n - k)] : 0.0;
            const long double d = static_cast<long double>(y[static_cast<std::size_t>(n)] - then);
            sum += d * d;
        }
        sums.push_back(sum);
    }
    return sums;
}

}  // namespace

TEST_CASE("lag: an exact match gives exactly 0 at its lag, and only there", "[measure]") {
    const int lag = GENERATE(-64, -63, -7, -1, 0, 1, 2, 31, 63, 64);
    const auto reference = q15_noise(5000, 81);
    const auto f = figures_of(reference, delayed(reference, lag), 64);
    CHECK(f.best_lag == lag);
    for (int k = -64; k <= 64; ++k) {
        if (k == lag) {
            CHECK(f.residual_at(k) == 0.0);
        } else {
            CHECK(f.residual_at(k) > 1000.0);  // 4936 terms of mean 2/3
        }
    }
}

TEST_CASE("lag: the residuals are those of the definition", "[measure]") {
    const int window = GENERATE(0, 1, 5, 6, 64);
    const std::size_t length = GENERATE(1u, 64u, 129u, 1024u, 1088u, 1089u, 5000u);
    const auto r = noise(length, 82), y = noise(length, 83);
    const auto f = figures_of(r, y, window);
    const auto expected = by_definition(r, y, window);
    REQUIRE(f.residual.size() == expected.size());
    CHECK(f.window == window);
    CHECK(f.samples == std::max<std::int64_t>(0, static_cast<std::int64_t>(length) - window));
    for (std::size_t i = 0; i < expected.size(); ++i) {
        // (1024 + samples / 1024 + 4) 2^-53 of itself, from the header
        const double relative = (1028.0 + static_cast<double>(length) / 1024.0) * 0x1p-53;
        REQUIRE_THAT(f.residual[i],
                     Catch::WithinAbs(static_cast<double>(expected[i]), relative * static_cast<double>(expected[i])));
    }
}

TEST_CASE("lag: any split gives the same figures, bit for bit", "[measure]") {
    const auto r = noise(5003, 84), y = noise(5003, 85);
    const auto whole = figures_of(r, y, 64);
    for (const Split split : every_split) {
        LagMeasure measure(64);
        for_blocks(split, r.size(), [&](std::size_t first, std::size_t count) {
            measure.add(std::span(r).subspan(first, count), std::span(y).subspan(first, count));
            if (split == Split::prime) (void)measure.value();  // looking in between changes nothing
        });
        CHECK(same_bits(measure.value().residual, whole.residual));
        CHECK(measure.value().samples == whole.samples);
    }
}

TEST_CASE("lag: samples before the first summed one are only the past of the reference, in any split", "[measure]") {
    const auto r = noise(4000, 91);
    auto y = noise(4000, 92);
    const int window = 64;
    for (const std::int64_t first : {std::int64_t{1}, std::int64_t{63}, std::int64_t{64}, std::int64_t{700},
                                     std::int64_t{1024}, std::int64_t{3935}, std::int64_t{3936}, std::int64_t{9000}}) {
        for (std::size_t n = 0; n < std::min<std::size_t>(y.size(), static_cast<std::size_t>(first)); ++n)
            y[n] = 1e9;  // must count nothing
        std::vector<double> whole;
        for (const Split split : every_split) {
            LagMeasure measure(window, 0, first);
            for_blocks(split, r.size(), [&](std::size_t at, std::size_t count) {
                measure.add(std::span(r).subspan(at, count), std::span(y).subspan(at, count));
            });
            const LagFigures figures = measure.value();
            INFO("first summed " << first);
            CHECK(figures.samples == std::max<std::int64_t>(4000 - window - first, 0));
            if (whole.empty()) whole = figures.residual;
            CHECK(same_bits(figures.residual, whole));
        }
        for (int k = -window; k <= window; ++k) {
            long double sum = 0.0L;
            for (std::int64_t n = first; n <= 3999 - window; ++n) {
                const double then = n - k >= 0 ? r[static_cast<std::size_t>(n - k)] : 0.0;
                const long double d = static_cast<long double>(y[static_cast<std::size_t>(n)] - then);
                sum += d * d;
            }
            // (1024 + samples / 1024 + 4) 2^-53 of the sum, lag.hpp; 1.2e-13 for 4000 samples.
            CHECK(std::fabs(whole[static_cast<std::size_t>(k + window)] - static_cast<double>(sum)) <=
                  1.2e-13 * static_cast<double>(sum));
        }
    }
}

TEST_CASE("lag: every lag is summed over the same samples", "[measure]") {
    // A lone pulse in the last `window` samples is seen by nothing that ends before it.
    std::vector<double> r(500, 0.0), y(500, 0.0);
    y[499 - 63] = 1.0;  // index length - window: decides nothing
    const auto f = figures_of(r, y, 64);
    CHECK(f.samples == 436);
    for (const double residual : f.residual) CHECK(residual == 0.0);
    y[499 - 64] = 1.0;  // the last one that does
    const auto g = figures_of(r, y, 64);
    for (const double residual : g.residual) CHECK(residual == 1.0);
}

TEST_CASE("lag: of equals the one nearest to the expected lag wins, then the positive one", "[measure]") {
    const std::vector<double> silence(300, 0.0);
    CHECK(figures_of(silence, silence, 64).best_lag == 0);
    CHECK(figures_of(silence, silence, 64, 5).best_lag == 5);
    CHECK(figures_of(silence, silence, 64, -64).best_lag == -64);
    CHECK(figures_of(silence, silence, 10, 30).best_lag == 10);
    CHECK(figures_of({}, {}, 64, 3).best_lag == 3);
    // A square wave of period 8 inverted: lags -4 and +4 fit equally well (up to the start), 0 does not.
    std::vector<double> wave(2000), inverted(2000);
    for (std::size_t n = 0; n < wave.size(); ++n) {
        wave[n] = n < 64 ? 0.0 : (n % 8 < 4 ? 1.0 : -1.0);
        inverted[n] = n < 68 ? 0.0 : -wave[n];
    }
    const auto f = figures_of(wave, inverted, 6);
    CHECK(f.residual_at(4) < f.residual_at(-4));
    CHECK(f.best_lag == 4);
}

TEST_CASE("lag: a NaN makes no lag look best", "[measure]") {
    const double nan = std::numeric_limits<double>::quiet_NaN();
    const auto r = q15_noise(3000, 86);
    auto y = delayed(r, 3);
    y[1500] = nan;
    const auto f = figures_of(r, y, 64, 7);
    for (const double residual : f.residual) CHECK(std::isnan(residual));
    CHECK(f.best_lag == 7);  // nothing is known: the expected one
    // Only some lags see a NaN near the end of the reference: the true lag must still win.
    auto holed = r;
    holed[2999] = nan;
    const auto g = figures_of(holed, delayed(r, 3), 64);
    CHECK(std::isnan(g.residual_at(-64)));
    CHECK(g.best_lag == 3);
    CHECK(g.residual_at(3) == 0.0);
}

TEST_CASE("lag: short records shrink the window", "[measure]") {
    CHECK(lag_window_for(0) == 0);
    CHECK(lag_window_for(1) == 0);
    CHECK(lag_window_for(2) == 0);
    CHECK(lag_window_for(3) == 1);
    CHECK(lag_window_for(128) == 63);
    CHECK(lag_window_for(129) == 64);
    CHECK(lag_window_for(1000000000000) == 64);
    const std::vector<double> r{0.0, 1.0, 0.0};
    CHECK(figures_of(r, std::vector<double>{0.0, 1.0, 0.0}, lag_window_for(3)).best_lag == 0);
}

TEST_CASE("lag: rounding noise does not move the lag of a slow signal", "[measure]") {
    // A slow ramp-like sine: neighbours differ by 0.6 LSB at most, many samples decide.
    std::vector<double> r(20000), y(20000);
    for (std::size_t n = 0; n < r.size(); ++n) {
        r[n] = 100.0 * std::sin(2.0 * 3.14159265358979323846 * static_cast<double>(n) / 1000.0);
        y[n] = n >= 1 ? std::round(100.0 * std::sin(2.0 * 3.14159265358979323846 * static_cast<double>(n - 1) / 1000.0))
                      : 0.0;
    }
    CHECK(figures_of(r, y, 64).best_lag == 1);
}

TEST_CASE("discrimination: the reference's own difference, by its definition", "[measure]") {
    const std::size_t length = GENERATE(200u, 3000u);
    const auto r = noise(length, 87);
    LagDiscrimination measure(64);
    for_blocks(Split::random, length,
               [&](std::size_t first, std::size_t count) { measure.add(std::span(r).subspan(first, count)); });
    const auto expected = by_definition(r, r, 64);
    long double smallest = std::numeric_limits<long double>::infinity();
    int hardest = 0;
    for (int k = -64; k <= 64; ++k) {
        const long double d = expected[static_cast<std::size_t>(k + 64)];
        if (k != 0 && d < smallest) {
            smallest = d;
            hardest = k;
        }
    }
    CHECK_THAT(measure.smallest(), Catch::WithinRel(static_cast<double>(smallest), 2e-13));
    CHECK(measure.hardest_lag() == hardest);
}

TEST_CASE("discrimination: a step of height h tells one sample by h^2, a period tells nothing", "[measure]") {
    std::vector<double> step(500, 0.0);
    for (std::size_t n = 100; n < step.size(); ++n) step[n] = 3.0;
    LagDiscrimination of_step(64);
    of_step.add(step);
    CHECK(of_step.smallest() == 9.0);
    CHECK(of_step.hardest_lag() == 1);  // and -1: the positive one
    std::vector<double> wave(1000);
    for (std::size_t n = 0; n < wave.size(); ++n) wave[n] = n % 10 < 5 ? 1.0 : -1.0;
    LagDiscrimination of_wave(64);
    of_wave.add(wave);
    CHECK(of_wave.hardest_lag() == -10);  // to the left nothing is missing, to the right the start is
    CHECK(of_wave.smallest() == 0.0);
    LagDiscrimination of_nothing(0);
    of_nothing.add(step);
    CHECK((of_nothing.smallest() == 0.0 && of_nothing.hardest_lag() == 0));
}
