// Times the oracle for oracle_bench.py: reads samples from a file of doubles, prints one line a job,
// "name seconds", the smallest of several runs. Takes the file and the number of samples.
#include <chrono>
#include <cstdio>
#include <cstdlib>
#include <functional>
#include <limits>
#include <string>
#include <vector>

#include "oracle/filters/fir.hpp"
#include "oracle/filters/partitioned_fir.hpp"
#include "oracle/measure/error.hpp"
#include "oracle/measure/lag.hpp"
#include "oracle/measure/response.hpp"
#include "tests/bench/twin_jobs.hpp"

using namespace halflsb;

namespace {

constexpr int runs = 5;
constexpr std::size_t block_samples = 4096;  // as the runner feeds them

double seconds_of(const std::function<void()>& job) {
    double best = std::numeric_limits<double>::infinity();
    for (int run = 0; run < runs; ++run) {
        const auto start = std::chrono::steady_clock::now();
        job();
        best = std::min(best, std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count());
    }
    return best;
}

void for_blocks(std::size_t length, const std::function<void(std::size_t, std::size_t)>& take) {
    for (std::size_t first = 0; first < length; first += block_samples) {
        take(first, std::min(block_samples, length - first));
    }
}

}  // namespace

int main(int count, char** arguments) {
    if (count != 3) return 64;
    const std::size_t length = std::strtoull(arguments[2], nullptr, 10);
    std::vector<double> x(length), y(length);
    std::FILE* file = std::fopen(arguments[1], "rb");
    if (file == nullptr || std::fread(x.data(), sizeof(double), length, file) != length) return 66;
    std::fclose(file);

    const auto time_of = [&](const std::string& name, Filter& filter, std::size_t some) {
        const double seconds = seconds_of([&] {
            filter.reset();
            for_blocks(some, [&](std::size_t first, std::size_t n) {
                filter.process(std::span(x).subspan(first, n), std::span(y).subspan(first, n));
            });
        });
        std::printf("%s %.9f\n", name.c_str(), seconds * static_cast<double>(length) / static_cast<double>(some));
    };
    const auto time_filter = [&](const std::string& name, const FilterDesign& design) {
        time_of(name, *make_filter({FilterStage{design, std::nullopt}}), length);
    };
    for (const int points : {16, 1000}) time_filter("moving-average-" + std::to_string(points), MovingAverage{points});
    for (const std::size_t taps : {16u, 64u, 256u}) {
        time_filter("fir-" + std::to_string(taps), Fir{std::vector<double>(taps, 1.0 / static_cast<double>(taps))});
    }
    // Both forms of the same FIR: where the one becomes faster is where make_filter should change over.
    for (const std::size_t taps : {256u, 512u, 1024u, 2048u, 4096u, 16384u, 65536u}) {
        const Fir design{std::vector<double>(taps, 1.0 / static_cast<double>(taps))};
        FirFilter direct(design);
        PartitionedFirFilter partitioned(design);
        time_of("direct-fir-" + std::to_string(taps), direct, std::min<std::size_t>(length, 100000));
        time_of("partitioned-fir-" + std::to_string(taps), partitioned, length);
    }
    time_filter("recursion-2", Recursion{{0.0675, 0.1349, 0.0675}, {1.0, -1.143, 0.4128}});
    time_filter("recursion-8",
                Recursion{std::vector<double>(9, 0.1), {1.0, -0.5, 0.3, -0.2, 0.1, 0.05, 0.0, 0.02, 0.01}});
    time_filter("median-9", Median{9});
    time_filter("median-501", Median{501});
    const BiquadSection section{0.0675, 0.1349, 0.0675, -1.143, 0.4128};
    time_filter("biquads-1", BiquadCascade{{section}});
    time_filter("biquads-4", BiquadCascade{{section, section, section, section}});

    time_filter("comb-24", Comb{24, 1.0, 0.5, -0.7});
    time_filter("comb-4000", Comb{4000, 1.0, 0.5, -0.7});
    const FilterStage slow{BiquadCascade{{BiquadSection{1e-5, 0.0, 0.0, 1e-5 - 1.0, 0.0}}}, std::nullopt};
    std::int64_t zeros = 0;
    const double flush_seconds = seconds_of([&] { zeros += flush_samples({slow}, 1.0, 0x1p-16).value_or(0); });
    std::printf("flush-1e6 %.9f\n", zeros > 0 ? flush_seconds : 0.0);

    for (const TwinJob& job : twin_jobs()) {
        const auto twin = job.make();
        const auto codes = q15_codes(x);
        std::vector<Code> returned(length);
        const double seconds = seconds_of([&] {
            twin->reset();
            for_blocks(length, [&](std::size_t first, std::size_t n) {
                twin->process(std::span(codes).subspan(first, n), std::span(returned).subspan(first, n));
            });
        });
        std::printf("%s %.9f\n", job.name.c_str(), seconds);
    }
    time_filter("biquads-4", BiquadCascade{{section, section, section, section}});

    // y is the last filter's output now: the same record the Python side makes for the measures.
    double kept = 0.0;  // what is computed must be used, or it would not be computed
    const auto time_measure = [&](const char* name, const std::function<double()>& job) {
        std::printf("%s %.9f\n", name, seconds_of([&] { kept += job(); }));
    };
    time_measure("error", [&] {
        ErrorMeasure measure(1.0);
        for_blocks(length, [&](std::size_t first, std::size_t n) {
            measure.add(std::span(x).subspan(first, n), std::span(y).subspan(first, n));
        });
        return measure.value().rms;
    });
    time_measure("lag-64", [&] {
        LagMeasure measure(64);
        for_blocks(length, [&](std::size_t first, std::size_t n) {
            measure.add(std::span(x).subspan(first, n), std::span(y).subspan(first, n));
        });
        return static_cast<double>(measure.value().best_lag);
    });
    const auto time_response = [&](const char* name, const std::function<std::unique_ptr<ResponseMeasure>()>& make) {
        time_measure(name, [&] {
            const auto measure = make();
            for_blocks(length, [&](std::size_t first, std::size_t n) {
                measure->add(std::span(x).subspan(first, n), std::span(y).subspan(first, n));
            });
            measure->finish();
            return measure->value()[0].stimulus_power;
        });
    };
    time_response("welch-4096", [] { return make_welch_response(4096); });
    time_response("tones-8", [&] {
        return make_tone_response({0.01, 0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.45}, static_cast<std::int64_t>(length));
    });
    return kept == kept ? 0 : 1;
}
