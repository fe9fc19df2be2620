// What derived limits cost, as ratios of two ways timed in this run: cases of one filter from what the plan keeps and
// each by itself; the sums of a comb without its zeros and with them. No arguments. No test: a table for people.
#include <chrono>
#include <cmath>
#include <cstdio>
#include <functional>

#include "oracle/arithmetic/path_sums.hpp"
#include "oracle/judge/derived_limits.hpp"

using namespace halflsb;

namespace {

double seconds_of(const std::function<void()>& job) {
    const auto start = std::chrono::steady_clock::now();
    job();
    return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
}

void tell(const char* what, double seconds, double other_seconds) {
    std::printf("%-48s %10.6f s %10.6f s  ratio %8.1f\n", what, seconds, other_seconds, other_seconds / seconds);
}

/// Noise of other seeds, in one filter of sharp poles.
Plan plan_of_cases(int cases) {
    Plan plan;
    plan.signal.rate_hz = 1200.0;
    plan.signal.input = plan.signal.output = *sample_format("q15");
    FilterStage stage;
    stage.kind = "biquad-cascade";
    // Bristow-Johnson's low-pass at a hundredth of the rate, Q 10.
    const double w = 0.0628318530717959, alpha = std::sin(w) / 20.0, a0 = 1.0 + alpha, b = (1.0 - std::cos(w)) / a0;
    stage.design = BiquadCascade{{{b / 2.0, b, b / 2.0, -2.0 * std::cos(w) / a0, (1.0 - alpha) / a0}}};
    stage.coefficient_fraction_bits = stage.arithmetic.coefficient_fraction_bits = 20;
    stage.arithmetic.rounding = Rounding::half_up;
    plan.filter = {stage};
    for (int i = 0; i < cases; ++i) {
        Case the_case;
        the_case.name = "noise " + std::to_string(i);
        the_case.shape = "noise";
        the_case.stimulus_values.set("level_ratio", 0.2);
        the_case.stimulus_values.set("length_samples", std::int64_t{4096});
        the_case.stimulus_values.set("seed", std::int64_t{i});
        auto stimulus = make_stimulus("noise", the_case.stimulus_values, {plan.signal.rate_hz, plan.signal.input});
        if (!stimulus) return {};
        the_case.stimulus = std::move(*stimulus);
        plan.cases.push_back(std::move(the_case));
    }
    return plan;
}

void time_cases() {
    constexpr int cases = 300;
    Plan plan = plan_of_cases(cases);
    double sum = 0.0;
    const auto derive_all = [&](bool forgets) {
        for (const Case& the_case : plan.cases) {
            if (forgets) plan.limits = make_limit_store();
            sum += derived_limits(plan, the_case, 1)->rms;
        }
    };
    const double kept = seconds_of([&] { derive_all(false); }), again = seconds_of([&] { derive_all(false); });
    const double alone = seconds_of([&] { derive_all(true); });
    tell("300 cases of one filter, kept and by themselves", kept, alone);
    tell("the same once more, when their noise is known", again, alone);
    if (!(sum > 0.0)) std::printf("no limits\n");
}

void time_comb() {
    const FilterStage comb{Comb{100, 1.0, 0.0, -0.99}, std::nullopt}, nothing{Fir{{1.0, 0.0}}, std::nullopt};
    double sum = 0.0;
    const double without = seconds_of([&] { sum += path_sums({comb}, 4096, 1).l1(); });
    const double with_zeros = seconds_of([&] { sum -= path_sums({comb, nothing}, 4096, 1).l1(); });
    tell("sums of a comb of 100 samples, without its zeros", without, with_zeros);
    if (!(std::fabs(sum) < 1e-6)) std::printf("they differ\n");
}

}  // namespace

int main() {
    time_cases();
    time_comb();
    return 0;
}
