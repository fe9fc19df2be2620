// How fast codes are made: million samples a second of processor time for each shape, quantised to q15. Run
// tests/bench/stimuli_bench.py to see them beside NumPy in the same run. No test depends on it.
//
// usage: stimuli_bench [MILLION_SAMPLES]      prints "NAME MILLION_PER_SECOND" lines
#include <algorithm>
#include <cstdio>
#include <cstdlib>
#include <ctime>
#include <string>
#include <vector>

#include "stimuli/stimulus.hpp"

using namespace halflsb;

namespace {

constexpr std::size_t block_samples = 4096;

/// Processor time, the best of three passes: other work on the machine only ever slows one down.
double million_per_second(const Stimulus& stimulus, std::int64_t samples) {
    const SampleFormat format = *sample_format("q15");
    std::vector<Code> codes(block_samples);
    double best = 0.0;
    for (int pass = 0; pass < 3; ++pass) {
        const std::clock_t begin = std::clock();
        for (std::int64_t first = 0; first < samples; first += block_samples) {
            fill_codes(stimulus, format, Rounding::half_up, first, codes);
        }
        const double spent_s = static_cast<double>(std::clock() - begin) / CLOCKS_PER_SEC;
        best = std::max(best, static_cast<double>(samples) / spent_s / 1e6);
    }
    return best;
}

void measure(const char* name, std::string_view shape, const ParameterValues& values, std::int64_t samples) {
    const auto stimulus = make_stimulus(shape, values, {48000.0, *sample_format("q15")});
    if (!stimulus) {
        std::fprintf(stderr, "%s: %s\n", name, to_text(stimulus.error()).c_str());
        std::exit(1);
    }
    std::printf("%s %.2f\n", name, million_per_second(**stimulus, samples));
}

}  // namespace

int main(int argc, char** argv) {
    const std::int64_t samples = (argc > 1 ? std::max(1, std::atoi(argv[1])) : 2) * std::int64_t{1'000'000};
    ParameterValues plain;
    plain.set("length_samples", samples + static_cast<std::int64_t>(block_samples));
    ParameterValues values = plain;
    measure("step", "step", values, samples);
    measure("uniform-noise", "noise", values, samples);
    values.set("distribution", std::string("normal"));
    measure("normal-noise", "noise", values, samples);
    values = plain;
    values.set("frequency_hz", 997.0);
    measure("sine", "sine", values, samples);
    values = plain;
    values.set("from_hz", 20.0);
    values.set("to_hz", 20000.0);
    measure("linear-chirp", "chirp", values, samples);
    values.set("sweep", std::string("logarithmic"));
    measure("logarithmic-chirp", "chirp", values, samples);
    values = plain;
    std::vector<double> tones;
    for (int k = 1; k <= 10; ++k) tones.push_back(997.0 * k);
    values.set("frequencies_hz", tones);
    measure("multitone-10", "multitone", values, samples / 10);
    values = plain;
    values.set("from_ratio", -1.0);
    values.set("to_ratio", 1.0);
    measure("ramp", "ramp", values, samples);
    values = plain;
    values.set("frequency_hz", 997.0);
    measure("square", "square", values, samples);
    values = plain;
    values.set("order", std::int64_t{31});
    measure("prbs-31", "prbs", values, samples);
    values = plain;
    values.set("frequency_hz", 997.0);
    values.set("on_samples", std::int64_t{480});
    values.set("off_samples", std::int64_t{480});
    measure("burst", "burst", values, samples);
    values = {};
    std::vector<StimulusWords> parts(1000, {"step", {}});
    for (StimulusWords& part : parts) part.values.set("length_samples", std::int64_t{10});
    values.set("parts", std::make_shared<const std::vector<StimulusWords>>(parts));
    values.set("repeat", samples / 10'000 + 1);
    measure("sequence-1000", "sequence", values, samples);
    values = plain;
    std::vector<StimulusWords> added(1, {"noise", {}});
    values.set("add", std::make_shared<const std::vector<StimulusWords>>(added));
    measure("step-add-noise", "step", values, samples);
    return 0;
}
