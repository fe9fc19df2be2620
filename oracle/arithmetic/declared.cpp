#include "oracle/arithmetic/declared.hpp"

#include <algorithm>

#include "oracle/filters/coefficients.hpp"

namespace halflsb {

namespace {

class DeclaredFilter final : public Filter {
public:
    DeclaredFilter(const FilterChain& design, const SampleFormat& output, double gain)
        : filter_(make_filter(declared_chain(design))),
          gain_(gain),
          lowest_(lowest_value(output)),
          highest_(highest_value(output)) {}

    void reset() override { filter_->reset(); }

    void process(std::span<const double> in, std::span<double> out) override {
        filter_->process(in, out);
        // NaN compares false with both rails and stays NaN, as it must: nothing may hide it.
        for (double& value : out) value = std::clamp(value * gain_, lowest_, highest_);
    }

private:
    std::unique_ptr<Filter> filter_;
    double gain_;
    double lowest_, highest_;
};

}  // namespace

FilterChain declared_chain(const FilterChain& design) {
    FilterChain declared;
    declared.reserve(design.size());
    for (const FilterStage& stage : design) declared.push_back(with_rounded_coefficients(stage));
    return declared;
}

std::unique_ptr<Filter> make_declared_filter(const FilterChain& design, const SampleFormat& output, double gain) {
    return std::make_unique<DeclaredFilter>(design, output, gain);
}

}  // namespace halflsb
