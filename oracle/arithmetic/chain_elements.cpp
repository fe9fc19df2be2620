#include "oracle/arithmetic/chain_elements.hpp"

#include <algorithm>

#include "oracle/arithmetic/family.hpp"

namespace halflsb {

namespace {

FilterStage bare(FilterDesign design, Initial initial = Initial::zeros) {
    FilterStage stage;
    stage.design = std::move(design);
    stage.initial = initial;
    return stage;
}

}  // namespace

bool ChainElement::is_recursive() const {
    if (comb() != nullptr) return comb()->feedback != 0.0;
    return std::any_of(feedback.begin(), feedback.end(), [](double a) { return a != 0.0; });
}

FilterChain ChainElement::loop() const {
    if (feedback.size() == 2) return {bare(BiquadCascade{{{1.0, 0.0, 0.0, feedback[0], feedback[1]}}})};
    std::vector<double> a{1.0};
    a.insert(a.end(), feedback.begin(), feedback.end());
    return {bare(Recursion{{1.0}, a})};
}

bool ChainElement::holds_one_state() const {
    const Structure s = stage->structure;
    if (!is_integer()) return false;
    return comb() != nullptr ||
           (has_sums() && (s == Structure::direct_1 || s == Structure::difference || s == Structure::leak));
}

bool ChainElement::is_first_order() const {
    if (comb() != nullptr) return true;
    return std::all_of(feedback.begin() + std::min<std::ptrdiff_t>(1, std::ssize(feedback)), feedback.end(),
                       [](double a) { return a == 0.0; });
}

bool ChainElement::shortens_to_output() const {
    return is_last_of_stage || stage->structure != Structure::direct_1 || stage->rounding_at != RoundingAt::output;
}

std::vector<ChainElement> chain_elements(const DescribedChain& chain, const ExactChain& exact) {
    std::vector<ChainElement> elements;
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        const DescribedStage& stage = chain.stages[i];
        const std::size_t first = exact.first_of[i];
        ChainElement element;
        element.stage = &stage;
        element.stage_index = i;
        element.name = "stage " + std::to_string(i + 1);
        element.in = stage.in.word;
        const auto* cascade = std::get_if<BiquadCascade>(&exact.stages[first].design);
        if (cascade == nullptr) {
            const auto begin = exact.stages.begin();
            element.exact.assign(begin + static_cast<std::ptrdiff_t>(first),
                                 begin + static_cast<std::ptrdiff_t>(exact.first_of[i + 1]));
            element.node.stage = exact.first_of[i + 1] - 1;
            if (const auto* recursion = std::get_if<Recursion>(&element.exact.front().design)) {
                element.forward = recursion->b;
                element.feedback.assign(recursion->a.begin() + 1, recursion->a.end());
            }
            elements.push_back(element);
        } else {
            const bool is_named = family_of(stage.stage) == Family::sections;
            for (std::size_t j = 0; j < cascade->sections.size(); ++j) {
                ChainElement part = element;
                const BiquadSection& s = cascade->sections[j];
                part.exact = {bare(BiquadCascade{{s}}, stage.stage.initial)};
                part.forward = {s.b0, s.b1, s.b2};
                part.feedback = {s.a1, s.a2};
                part.node = {first, j, false};
                part.is_last_of_stage = j + 1 == cascade->sections.size();
                if (is_named) part.name += ", section " + std::to_string(j + 1);
                elements.push_back(part);
                element.in = part.shortens_to_output() ? stage.out.word : stage.state;
            }
        }
    }
    for (std::size_t k = 0; k < elements.size(); ++k) elements[k].is_last = k + 1 == elements.size();
    return elements;
}

}  // namespace halflsb
