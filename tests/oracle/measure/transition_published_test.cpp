#include <algorithm>

#include "tests/oracle/measure/transition_records.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

double slope_of_second_order(double zeta, double t) {
    const double h = 1e-5;
    return (second_order(zeta, t + h) - second_order(zeta, t - h)) / (2.0 * h);
}

}  // namespace

TEST_CASE("transition: the ramp of a moving average", "[measure][published]") {
    const CsvTable table("moving-average-summary.csv");
    const StateLevels levels =
        GENERATE(StateLevels{0, 1}, StateLevels{0, -1}, StateLevels{-0.25, 0.5}, StateLevels{5000.0, -3000.0});
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double m = table.number(row, "M ");
        INFO("points " << m << ", levels " << levels.first << " .. " << levels.second);
        const auto ramp = record_of([m](double n) { return std::min((n + 1.0) / m, 1.0); }, 400, levels);
        auto question = question_of(levels);
        question.band_percent = 5.0;
        const auto f = figures_of(question, ramp);
        // Straight lines are what is measured; z loses some 2^-53 of the larger level over the amplitude of 3/4 and
        // more, an instant M times that; a table of 16 digits no more.
        const double slack = 1e-14 * m;
        CHECK(value(f.duration_samples) == Approx(table.number(row, "step 10-90%")).margin(slack).epsilon(0));
        // z = (t + 1) / M
        CHECK(value(f.low_instant) == Approx(0.1 * m - 1.0).margin(slack).epsilon(0));
        CHECK(value(f.mid_instant) == Approx(0.5 * m - 1.0).margin(slack).epsilon(0));
        CHECK(value(f.high_instant) == Approx(0.9 * m - 1.0).margin(slack).epsilon(0));
        CHECK(value(f.settling_samples) == Approx(0.45 * m).margin(slack).epsilon(0));
        CHECK(value(f.final_value) == levels.second);
        for (const auto& aberration :
             {f.overshoot_percent, f.undershoot_percent, f.preshoot_percent, f.early_overshoot_percent}) {
            CHECK(value(aberration) < 1e-13);
        }
        for (const auto& exact : {f.duration_samples, f.mid_instant, f.settling_samples, f.final_value}) {
            CHECK(uncertainty(exact) == 0.0);
        }
    }
}

TEST_CASE("transition: first order gives the published durations", "[measure][published]") {
    const CsvTable table("first-order-settling.csv");
    const double tau = 1000.0;
    const auto rise = record_of([tau](double n) { return -std::expm1(-n / tau); }, 18000);
    // |y''| / (8 |y'|) = 1 / (8 tau) samples at any instant, so 1 / (8 tau^2) time constants, twice in a duration.
    const double slack = 2.0 / (8.0 * tau * tau);
    const double mid = table.number(0, "value");
    int checked = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const std::string quantity = table.text(row, "quantity");
        const double expected = table.number(row, "value");
        INFO(quantity);
        auto question = question_of();
        const double percent = quantity.rfind("settling to ", 0) == 0 ? std::atof(quantity.c_str() + 12) : 0.0;
        if (quantity.rfind("50 %", 0) == 0) {
            CHECK(value(figures_of(question, rise).mid_instant) / tau == Approx(expected).margin(slack).epsilon(0));
        } else if (quantity.rfind("10-90", 0) == 0) {
            CHECK(value(figures_of(question, rise).duration_samples) / tau ==
                  Approx(expected).margin(slack).epsilon(0));
        } else if (quantity.rfind("20-80", 0) == 0) {
            question.low_percent = 20.0;
            question.high_percent = 80.0;
            CHECK(value(figures_of(question, rise).duration_samples) / tau ==
                  Approx(expected).margin(slack).epsilon(0));
        } else if (percent > 0.0) {
            // The table counts from the step, the figure from the 50 % instant.
            question.band_percent = percent;
            if (quantity.find("12 bit") != std::string::npos) question.band_percent = 100.0 / 8192.0;
            if (quantity.find("16 bit") != std::string::npos) question.band_percent = 100.0 / 131072.0;
            CHECK(value(figures_of(question, rise).settling_samples) / tau ==
                  Approx(expected - mid).margin(slack).epsilon(0));
        } else {
            continue;
        }
        ++checked;
    }
    CHECK(checked == 10);
}

TEST_CASE("transition: second order gives the published overshoot, durations and settling", "[measure][published]") {
    const CsvTable table("second-order-step.csv");
    const double step = 0.005;  // of wn t a sample
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double zeta = table.number(row, "damping");
        INFO("zeta " << zeta);
        const double t2 = table.number(row, "2 % settling"), t5 = table.number(row, "5 % settling");
        const auto samples = static_cast<std::size_t>(std::max(2.0 * t2, 16.0) / step);
        const auto rise = record_of([&](double n) { return second_order(zeta, step * n); }, samples);
        auto question = question_of();
        const auto f = figures_of(question, rise);
        // |y''| <= 1 everywhere, so an instant is off by at most step^2 / 8 over the slope there (1.2: the slope
        // changes by less than a fifth over a sample), in wn t; the table's own digits are beyond that.
        const auto slack = [&](double t) {
            return 1.2 * step * step / 8.0 / std::fabs(slope_of_second_order(zeta, t));
        };
        const double low = step * value(f.low_instant), mid = step * value(f.mid_instant),
                     high = step * value(f.high_instant);
        CHECK(high - low == Approx(table.number(row, "10-90")).margin(slack(low) + slack(high)).epsilon(0));
        CHECK(second_order(zeta, mid) == Approx(0.5).margin(step * step / 8.0).epsilon(0));
        CHECK(mid + step * value(f.settling_samples) == Approx(t2).margin(slack(t2) + 1e-8).epsilon(0));
        question.band_percent = 5.0;
        CHECK(mid + step * value(figures_of(question, rise).settling_samples) ==
              Approx(t5).margin(slack(t5) + 1e-8).epsilon(0));
        // The sample nearest to the peak is at most half a sample off: 1/2 |y''| (step / 2)^2.
        CHECK(value(f.overshoot_percent) ==
              Approx(table.number(row, "overshoot")).margin(100.0 * step * step / 8.0 + 1e-12).epsilon(0));
        CHECK(value(f.preshoot_percent) == 0.0);
        CHECK(value(f.early_overshoot_percent) == 0.0);
        // The first swing back is the overshoot of the overshoot; its peak sampled likewise.
        const double overshoot = table.number(row, "overshoot") / 100.0;
        CHECK(value(f.undershoot_percent) ==
              Approx(100.0 * overshoot * overshoot).margin(100.0 * step * step / 8.0 + 1e-12).epsilon(0));
        CHECK(value(f.final_value) == Approx(1.0).margin(0.01).epsilon(0));
    }
}
