#include "oracle/arithmetic/exact_chain.hpp"

#include <cmath>

#include "oracle/filters/coefficients.hpp"

namespace halflsb {

namespace {

double as_float(double number) { return static_cast<double>(static_cast<float>(number)); }

void store_as_float(FilterStage& stage, Structure structure) {
    if (auto* fir = std::get_if<Fir>(&stage.design)) {
        for (double& tap : fir->taps) tap = as_float(tap);
    } else if (auto* comb = std::get_if<Comb>(&stage.design)) {
        for (double* c : {&comb->direct, &comb->forward, &comb->feedback}) *c = as_float(*c);
    } else if (auto* recursion = std::get_if<Recursion>(&stage.design)) {
        for (auto* list : {&recursion->b, &recursion->a}) {
            for (double& c : *list) c = as_float(c);
        }
    } else if (auto* decimator = std::get_if<FirDecimator>(&stage.design)) {
        for (double& tap : decimator->taps) tap = as_float(tap);
    } else if (auto* interpolator = std::get_if<FirInterpolator>(&stage.design)) {
        for (double& tap : interpolator->taps) tap = as_float(tap);
    } else if (auto* cascade = std::get_if<BiquadCascade>(&stage.design)) {
        const bool has_pole_of_k = structure == Structure::difference || structure == Structure::leak;
        for (BiquadSection& s : cascade->sections) {
            for (double* c : {&s.b0, &s.b1, &s.b2}) *c = as_float(*c);
            if (has_pole_of_k) s.a1 = s.b0 - 1.0;
            for (double* c : {&s.a1, &s.a2}) *c = has_pole_of_k ? *c : as_float(*c);
        }
    }
}

/// What a sum is multiplied with, times points: 1 where it is divided.
double gain_of_reciprocal(const DescribedStage& stage, int points) {
    if (stage.division != Division::reciprocal) return 1.0;
    if (stage.number == NumberKind::float32) return points * as_float(1.0 / points);
    const auto stored = static_cast<double>(stored_coefficient(stage, 1.0 / points));
    return std::ldexp(stored * points, -stage.coefficient_fraction_bits);
}

}  // namespace

FilterChain exact_stages(const DescribedStage& stage) {
    FilterStage exact = with_rounded_coefficients(stage.stage);
    if (stage.number == NumberKind::float32) store_as_float(exact, stage.structure);
    FilterChain stages{exact};
    if (const auto* average = std::get_if<MovingAverage>(&exact.design)) {
        const double gain = gain_of_reciprocal(stage, average->points);
        if (gain != 1.0) {
            FilterStage scale;
            scale.design = Fir{{gain}};
            stages.push_back(scale);
        }
    }
    return stages;
}

ExactChain exact_chain(const DescribedChain& chain) {
    ExactChain exact;
    for (const DescribedStage& stage : chain.stages) {
        exact.first_of.push_back(exact.stages.size());
        for (FilterStage& each : exact_stages(stage)) exact.stages.push_back(std::move(each));
    }
    exact.first_of.push_back(exact.stages.size());
    return exact;
}

}  // namespace halflsb
