#include "oracle/arithmetic/named_coefficients.hpp"

#include "oracle/arithmetic/family.hpp"

namespace halflsb {

std::vector<NamedCoefficient> named_coefficients(const DescribedStage& described) {
    std::vector<NamedCoefficient> all;
    const bool added = described.feedback_coefficients == FeedbackCoefficients::added;
    const auto feedback = [&](std::string name, double a) {
        all.push_back({added ? "-" + name : std::move(name), added ? -a : a});
    };
    const FilterDesign& design = described.stage.design;
    const auto list = [&](const char* name, const std::vector<double>& numbers) {
        for (std::size_t k = 0; k < numbers.size(); ++k)
            all.push_back({name + ("[" + std::to_string(k) + "]"), numbers[k]});
    };
    if (const auto* fir = std::get_if<Fir>(&design)) {
        list("taps", fir->taps);
    } else if (const auto* decimator = std::get_if<FirDecimator>(&design)) {
        list("taps", decimator->taps);
    } else if (const auto* interpolator = std::get_if<FirInterpolator>(&design)) {
        list("taps", interpolator->taps);
    } else if (const auto* recursion = std::get_if<Recursion>(&design)) {
        list("b", recursion->b);
        for (std::size_t k = 1; k < recursion->a.size(); ++k) feedback("a[" + std::to_string(k) + "]", recursion->a[k]);
    } else if (const auto* comb = std::get_if<Comb>(&design)) {
        all = {{"direct", comb->direct}, {"forward", comb->forward}};
        feedback("feedback", comb->feedback);
    } else if (const auto* cascade = std::get_if<BiquadCascade>(&design)) {
        if (family_of(described.stage) == Family::one_pole) {
            const double k = cascade->sections.front().b0;
            all.push_back({"coefficient", k});
            if (described.structure == Structure::direct_1) all.push_back({"1 - coefficient", 1.0 - k});
            return all;
        }
        for (std::size_t i = 0; i < cascade->sections.size(); ++i) {
            const BiquadSection& s = cascade->sections[i];
            const std::string of = cascade->sections.size() == 1 ? "" : " of section " + std::to_string(i + 1);
            all.push_back({"b0" + of, s.b0});
            all.push_back({"b1" + of, s.b1});
            all.push_back({"b2" + of, s.b2});
            feedback("a1" + of, s.a1);
            feedback("a2" + of, s.a2);
        }
    } else if (const auto* average = std::get_if<MovingAverage>(&design)) {
        if (described.division == Division::reciprocal) all.push_back({"1 / points", 1.0 / average->points});
    }
    return all;
}

}  // namespace halflsb
