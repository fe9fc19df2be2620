#include "tests/bench/twin_jobs.hpp"

namespace halflsb {

namespace {

TwinJob job(std::string name, std::string kind, FilterDesign design, StageArithmetic arithmetic) {
    FilterStage stage{std::move(design), 14, std::move(arithmetic), std::move(kind)};
    return {"twin-" + std::move(name), [stage] {
                const SampleFormat q15 = *sample_format("q15");
                return make_twin(*describe({stage}, q15, q15, 1.0).described);
            }};
}

}  // namespace

std::vector<TwinJob> twin_jobs() {
    StageArithmetic half_up;
    half_up.rounding = Rounding::half_up;
    const auto with = [&](auto change) {
        StageArithmetic changed = half_up;
        change(changed);
        return changed;
    };
    const BiquadSection section{0.0675, 0.1349, 0.0675, -1.143, 0.4128};
    const BiquadCascade one{{section}}, four{{section, section, section, section}};
    std::vector<TwinJob> jobs;
    jobs.push_back(job("moving-average-16", "moving-average", MovingAverage{16}, half_up));
    jobs.push_back(job("fir-64", "fir", Fir{std::vector<double>(64, 1.0 / 64.0)}, half_up));
    jobs.push_back(job("biquads-1", "biquad-cascade", one, half_up));
    jobs.push_back(job("biquads-4", "biquad-cascade", four, half_up));
    const auto in_128_bits = with([](StageArithmetic& words) {
        words.state_bits = 64;
        words.state_fraction_bits = 40;
    });
    jobs.push_back(job("wide-biquads-1", "biquad-cascade", one, in_128_bits));
    for (const Structure structure : {Structure::direct_2, Structure::transposed_2}) {
        jobs.push_back(job(std::string(name_of(structure)) + "-biquads-1", "biquad-cascade", one,
                           with([&](StageArithmetic& words) { words.structure = structure; })));
    }
    jobs.push_back(job("float32-biquads-1", "biquad-cascade", one,
                       with([](StageArithmetic& words) { words.number = NumberKind::float32; })));
    jobs.push_back(job("comb-24", "comb", Comb{24, 1.0, 0.5, -0.7}, half_up));
    return jobs;
}

std::vector<Code> q15_codes(std::span<const double> values) {
    const SampleFormat q15 = *sample_format("q15");
    std::vector<Code> codes;
    for (const double value : values) codes.push_back(code_of(q15, value, Rounding::half_even));
    return codes;
}

}  // namespace halflsb
