#include "oracle/filters/node_path.hpp"

#include <algorithm>

namespace halflsb {

namespace {

FilterStage bare(FilterDesign design, std::string kind) {
    return {std::move(design), std::nullopt, {}, std::move(kind), {}};
}

FilterStage bare_cascade(std::vector<BiquadSection> sections) {
    return bare(BiquadCascade{std::move(sections)}, "biquad-cascade");
}

// Copies, so that the words of the firmware do not stay with a part of its stage.
void add_stages(FilterChain& path, const FilterChain& chain, std::size_t first, std::size_t end) {
    for (std::size_t i = first; i < end; ++i) path.push_back(bare(chain[i].design, chain[i].kind));
}

void add_sections(FilterChain& path, const BiquadCascade& cascade, std::size_t first, std::size_t end) {
    if (first >= end) return;
    const auto begin = cascade.sections.begin();
    path.push_back(
        bare_cascade({begin + static_cast<std::ptrdiff_t>(first), begin + static_cast<std::ptrdiff_t>(end)}));
}

const BiquadCascade* cascade_at(const FilterChain& chain, const FilterNode& node) {
    return std::get_if<BiquadCascade>(&chain[node.stage].design);
}

std::size_t sections_at(const FilterChain& chain, const FilterNode& node) {
    const BiquadCascade* const cascade = cascade_at(chain, node);
    return cascade ? cascade->sections.size() : 1;
}

bool is_there(const FilterChain& chain, const FilterNode& node) {
    return node.stage < chain.size() && node.section < sections_at(chain, node);
}

// 1 / A(z) of the node's section; nothing for a stage without feedback.
void add_loop(FilterChain& path, const FilterChain& chain, const FilterNode& node) {
    if (const BiquadCascade* const cascade = cascade_at(chain, node)) {
        const BiquadSection& s = cascade->sections[node.section];
        path.push_back(bare_cascade({{1.0, 0.0, 0.0, s.a1, s.a2}}));
    } else if (const auto* comb = std::get_if<Comb>(&chain[node.stage].design)) {
        path.push_back(bare(Comb{comb->delay_samples, 1.0, 0.0, comb->feedback}, "comb"));
    } else if (const auto* recursion = std::get_if<Recursion>(&chain[node.stage].design)) {
        path.push_back(bare(Recursion{{1.0}, recursion->a}, "iir"));
    }
}

// From the input of section `first` of the node's stage to the output.
void add_rest(FilterChain& path, const FilterChain& chain, const FilterNode& node, std::size_t first) {
    if (const BiquadCascade* const cascade = cascade_at(chain, node)) {
        add_sections(path, *cascade, first, cascade->sections.size());
    } else if (first == 0) {
        add_stages(path, chain, node.stage, node.stage + 1);
    }
    add_stages(path, chain, node.stage + 1, chain.size());
}

// From the input to the output of the section before `end`.
void add_start(FilterChain& path, const FilterChain& chain, const FilterNode& node, std::size_t end) {
    add_stages(path, chain, 0, node.stage);
    if (const BiquadCascade* const cascade = cascade_at(chain, node)) {
        add_sections(path, *cascade, 0, end);
    } else if (end > 0) {
        add_stages(path, chain, node.stage, node.stage + 1);
    }
}

}  // namespace

FilterChain path_to_output(const FilterChain& chain, FilterNode node) {
    FilterChain path;
    if (!is_there(chain, node)) return path;
    if (node.in_feedback) add_loop(path, chain, node);
    add_rest(path, chain, node, node.section + 1);
    return path;
}

FilterChain path_from_section(const FilterChain& chain, FilterNode node) {
    FilterChain path;
    if (is_there(chain, node)) add_rest(path, chain, node, node.section);
    return path;
}

FilterChain path_from_input(const FilterChain& chain, FilterNode node) {
    FilterChain path;
    if (is_there(chain, node)) add_start(path, chain, node, node.section + 1);
    return path;
}

FilterChain path_to_state(const FilterChain& chain, FilterNode node) {
    FilterChain path;
    if (!is_there(chain, node)) return path;
    add_start(path, chain, node, node.section);
    add_loop(path, chain, node);
    return path;
}

}  // namespace halflsb
