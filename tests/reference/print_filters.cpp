// Runs filters for filters_test.py, recursions_test.py and rates_test.py. A case is: how many stages, for each its kind
// and its list of numbers, a list of frequencies in cycles a sample, a list of input samples, and the ratio half_step /
// full_scale of the flush. Kinds: 0 moving average, points; 1 FIR, taps; 2 biquads, b0 b1 b2 a1 a2 of each section;
// and, by the words of a plan at 1000 samples a second, 3 comb, delay direct forward feedback; 4 one-pole, way value; 5
// DC blocker, way value gain; 6 notch, frequency q; by their numbers again 7 recursion, how many b, then b and a; 8
// median, points; 9 CIC decimator and 10 CIC interpolator, order factor delay shift (-1: none), of 9 then the phase; 11
// FIR decimator, factor, phase, taps; 12 FIR interpolator, factor, taps. 100 is added to the kind for a start with the
// first sample, 200 for one that grows. The answer is: the output samples, real and imaginary part at each frequency,
// the L1 norm, the largest pole radius, the samples of the flush (-1: none); of a lone recursion before all that
// whether it is stable (if not, that and its radius are all), and behind it the bounds of a plain recursion's loss and
// of its own.
#include "oracle/filters/rates.hpp"
#include "oracle/filters/recursion.hpp"
#include "oracle/filters/stability.hpp"
#include "tests/reference/binary_cases.hpp"

using namespace halflsb;
using namespace halflsb::reference;

namespace {

constexpr double rate_hz = 1000.0;

FilterStage made(const char* kind, const ParameterValues& values) {
    const auto stage = make_stage(kind, values, {.rate_hz = rate_hz});
    if (stage) return *stage;
    std::fprintf(stderr, "%s: %s\n", kind, to_text(stage.error()).c_str());
    std::exit(1);
}

FilterStage comb(const std::vector<double>& list) {
    ParameterValues values;
    values.set("delay_samples", static_cast<std::int64_t>(list.at(0)));
    values.set("direct", list.at(1));
    values.set("forward", list.at(2));
    values.set("feedback", list.at(3));
    return made("comb", values);
}

FilterStage one_pole(const std::vector<double>& list) {
    const char* const ways[] = {"coefficient", "shift_bits", "corner_hz", "time_constant_s"};
    ParameterValues values;
    const auto way = static_cast<std::size_t>(list.at(0));
    if (way == 1) {
        values.set(ways[way], static_cast<std::int64_t>(list.at(1)));
    } else {
        values.set(ways[way], list.at(1));
    }
    return made("one-pole", values);
}

FilterStage dc_blocker(const std::vector<double>& list) {
    ParameterValues values;
    values.set(list.at(0) == 0.0 ? "pole" : "corner_hz", list.at(1));
    values.set("gain", std::string(list.at(2) == 0.0 ? "plain" : "unity-at-nyquist"));
    return made("dc-blocker", values);
}

FilterStage notch(const std::vector<double>& list) {
    ParameterValues values;
    values.set("frequency_hz", list.at(0));
    values.set("q", list.at(1));
    return made("notch", values);
}

FilterDesign recursion(const std::vector<double>& list) {
    const auto middle = list.begin() + 1 + static_cast<std::ptrdiff_t>(list.at(0));
    return Recursion{{list.begin() + 1, middle}, {middle, list.end()}};
}

template <class Cic>
FilterDesign cic(const std::vector<double>& list) {
    Cic design{static_cast<int>(list.at(0)), static_cast<int>(list.at(1)), static_cast<int>(list.at(2)), {}};
    if (list.at(3) >= 0.0) design.shift_bits = static_cast<int>(list[3]);
    if constexpr (requires { design.phase_samples; }) design.phase_samples = static_cast<int>(list.at(4));
    return design;
}

FilterDesign fir_decimator(const std::vector<double>& list) {
    return FirDecimator{{list.begin() + 2, list.end()}, static_cast<int>(list.at(0)), static_cast<int>(list.at(1))};
}

FilterDesign fir_interpolator(const std::vector<double>& list) {
    return FirInterpolator{{list.begin() + 1, list.end()}, static_cast<int>(list.at(0))};
}

FilterStage stage_of(int kind, std::vector<double> list) {
    if (kind == 7) return {recursion(list), std::nullopt};
    if (kind == 8) return {Median{static_cast<int>(list.at(0))}, std::nullopt};
    if (kind == 9) return {cic<CicDecimator>(list), std::nullopt};
    if (kind == 10) return {cic<CicInterpolator>(list), std::nullopt};
    if (kind == 11) return {fir_decimator(list), std::nullopt};
    if (kind == 12) return {fir_interpolator(list), std::nullopt};
    if (kind == 0) return {MovingAverage{static_cast<int>(list.at(0))}, std::nullopt};
    if (kind == 1) return {Fir{std::move(list)}, std::nullopt};
    if (kind == 3) return comb(list);
    if (kind == 4) return one_pole(list);
    if (kind == 5) return dc_blocker(list);
    if (kind == 6) return notch(list);
    BiquadCascade cascade;
    for (std::size_t i = 0; i + 5 <= list.size(); i += 5) {
        cascade.sections.push_back({list[i], list[i + 1], list[i + 2], list[i + 3], list[i + 4]});
    }
    return {std::move(cascade), std::nullopt};
}

FilterStage read_stage() {
    const auto kind = static_cast<int>(number());
    FilterStage stage = stage_of(kind % 100, numbers());
    stage.initial = static_cast<Initial>(kind / 100);
    return stage;
}

const Recursion* lone_recursion(const FilterChain& chain) {
    return chain.size() == 1 ? std::get_if<Recursion>(&chain.front().design) : nullptr;
}

}  // namespace

int main() {
    for (double stages = 0.0; read_number(stages);) {
        FilterChain chain;
        while (chain.size() < static_cast<std::size_t>(stages)) chain.push_back(read_stage());
        const std::vector<double> frequencies = numbers();
        const std::vector<double> samples = numbers();
        const double half_step = number();
        const Recursion* alone = lone_recursion(chain);
        if (alone != nullptr) {
            const bool stable = is_stable(*alone);
            write_numbers({stable ? 1.0 : 0.0});
            if (!stable) write_numbers({pole_radius(*alone)});
            if (!stable) continue;
        }
        const auto filter = make_filter(chain);
        std::vector<double> out(filter->outputs_for(samples.size()));
        filter->process(samples, out);
        write_numbers(out);
        for (const double f : frequencies) {
            const auto h = response_at(chain, f);
            write_numbers({h.real(), h.imag()});
        }
        const auto flush = flush_samples(chain, 1.0, half_step);
        write_numbers({l1_norm(chain), largest_pole_radius(chain), flush ? static_cast<double>(*flush) : -1.0});
        if (alone != nullptr) write_numbers({recursion_loss(*alone), carried_recursion_loss(*alone)});
    }
}
