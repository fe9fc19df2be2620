#include "oracle/arithmetic/chain_elements.hpp"

#include "oracle/arithmetic/family.hpp"

namespace halflsb {

bool ChainElement::is_recursive() const {
    if (const BiquadSection* s = section()) return s->a1 != 0.0 || s->a2 != 0.0;
    return std::holds_alternative<Comb>(exact.front().design);
}

const BiquadSection* ChainElement::section() const {
    const auto* cascade = std::get_if<BiquadCascade>(&exact.front().design);
    return cascade == nullptr ? nullptr : &cascade->sections.front();
}

bool ChainElement::holds_one_state() const {
    const Structure s = stage->structure;
    if (!is_integer()) return false;
    if (section() != nullptr) {
        return s == Structure::direct_1 || s == Structure::difference || s == Structure::leak;
    }
    return is_recursive();
}

bool ChainElement::is_first_order() const { return section() == nullptr ? is_recursive() : section()->a2 == 0.0; }

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
            elements.push_back(element);
        } else {
            const bool is_named = family_of(stage.stage) == Family::sections;
            for (std::size_t j = 0; j < cascade->sections.size(); ++j) {
                ChainElement part = element;
                part.exact = {FilterStage{BiquadCascade{{cascade->sections[j]}}, std::nullopt, {}, "", {}}};
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
