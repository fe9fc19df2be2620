// Runs filters for filters_test.py. A case is: how many stages, for each its kind and its list of numbers, a list
// of frequencies in cycles a sample, a list of input samples, and the ratio half_step / full_scale of the flush.
// Kinds: 0 moving average, points; 1 FIR, taps; 2 biquads, b0 b1 b2 a1 a2 of each section; and, by the words of a
// plan at 1000 samples a second, 3 comb, delay direct forward feedback; 4 one-pole, way value; 5 DC blocker, way
// value gain; 6 notch, frequency q. The answer is: the output samples, real and imaginary part at each frequency,
// the L1 norm, the largest pole radius, the samples of the flush (-1: none).
#include "oracle/filters/filter.hpp"
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

FilterStage read_stage() {
    const auto kind = static_cast<int>(number());
    std::vector<double> list = numbers();
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

}  // namespace

int main() {
    for (double stages = 0.0; read_number(stages);) {
        FilterChain chain;
        while (chain.size() < static_cast<std::size_t>(stages)) chain.push_back(read_stage());
        const std::vector<double> frequencies = numbers();
        std::vector<double> samples = numbers();
        const double half_step = number();
        make_filter(chain)->process(samples, samples);
        write_numbers(samples);
        for (const double f : frequencies) {
            const auto h = response_at(chain, f);
            write_numbers({h.real(), h.imag()});
        }
        const auto flush = flush_samples(chain, 1.0, half_step);
        write_numbers({l1_norm(chain), largest_pole_radius(chain), flush ? static_cast<double>(*flush) : -1.0});
    }
}
