#include "oracle/arithmetic/family.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

Family family_of(const FilterStage& stage) {
    struct Sorter {
        const FilterStage& stage;
        Family operator()(const MovingAverage&) const { return Family::average; }
        Family operator()(const Fir&) const { return Family::fir; }
        Family operator()(const FirDecimator&) const { return Family::fir; }
        Family operator()(const FirInterpolator&) const { return Family::fir; }
        Family operator()(const Comb&) const { return Family::comb; }
        Family operator()(const Recursion&) const { return Family::recursion; }
        Family operator()(const Median&) const { return Family::median; }
        Family operator()(const CicDecimator&) const { return Family::cic; }
        Family operator()(const CicInterpolator&) const { return Family::cic; }
        Family operator()(const BiquadCascade&) const {
            return stage.kind == "one-pole" ? Family::one_pole : Family::sections;
        }
    };
    return std::visit(Sorter{stage}, stage.design);
}

std::string_view text_of(Family family) {
    switch (family) {
        case Family::fir:
            return "a fir";
        case Family::average:
            return "a moving average";
        case Family::one_pole:
            return "a one-pole";
        case Family::comb:
            return "a comb";
        case Family::recursion:
            return "an iir";
        case Family::median:
            return "a median";
        case Family::cic:
            return "a cic";
        case Family::sections:
            break;
    }
    return "a filter of sections";
}

const std::vector<Structure>& structures_of(Family family) {
    static const std::vector<Structure> direct{Structure::direct_1},
        average{Structure::running_sum, Structure::fresh_sum},
        one_pole{Structure::difference, Structure::leak, Structure::direct_1},
        sections{Structure::direct_1, Structure::direct_2, Structure::transposed_2};
    switch (family) {
        case Family::fir:
        case Family::comb:
        case Family::median:
        case Family::cic:
            return direct;
        case Family::average:
            return average;
        case Family::one_pole:
            return one_pole;
        case Family::recursion:
        case Family::sections:
            break;
    }
    return sections;
}

Structure structure_of(const FilterStage& stage) {
    const std::vector<Structure>& all = structures_of(family_of(stage));
    const auto& said = stage.arithmetic.structure;
    return said && std::find(all.begin(), all.end(), *said) != all.end() ? *said : all.front();
}

bool is_by_shift(const FilterStage& stage) {
    if (family_of(stage) != Family::one_pole || stage.coefficient_fraction_bits) return false;
    int exponent = 0;
    return std::frexp(std::get<BiquadCascade>(stage.design).sections.front().b0, &exponent) == 0.5;
}

}  // namespace halflsb
