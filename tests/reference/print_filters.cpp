// Runs filters for filters_test.py. A case is: how many stages, for each its kind (0 moving average,
// 1 FIR, 2 biquads) and its list of numbers (points; taps; b0 b1 b2 a1 a2 of each section), a list of
// frequencies in cycles a sample, a list of input samples. The answer is: the output samples, real and
// imaginary part at each frequency, the L1 norm, the largest pole radius.
#include "oracle/filters/filter.hpp"
#include "tests/reference/binary_cases.hpp"

using namespace halflsb;
using namespace halflsb::reference;

namespace {

FilterStage read_stage() {
    const auto kind = static_cast<int>(number());
    std::vector<double> list = numbers();
    if (kind == 0) return {MovingAverage{static_cast<int>(list.at(0))}, std::nullopt};
    if (kind == 1) return {Fir{std::move(list)}, std::nullopt};
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
        make_filter(chain)->process(samples, samples);
        write_numbers(samples);
        for (const double f : frequencies) {
            const auto h = response_at(chain, f);
            write_numbers({h.real(), h.imag()});
        }
        write_numbers({l1_norm(chain), largest_pole_radius(chain)});
    }
}
