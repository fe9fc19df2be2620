#include "oracle/arithmetic/node_bounds.hpp"

namespace halflsb {

namespace {

using Place = RoundingPoint::Place;

bool is_at(const RoundingPoint& point, const ChainElement& element) {
    return point.node.stage == element.node.stage && point.node.section == element.node.section;
}

bool is_before(const RoundingPoint& point, const ChainElement& element) {
    return point.node.stage < element.node.stage ||
           (point.node.stage == element.node.stage && point.node.section < element.node.section);
}

}  // namespace

NodeBounds::NodeBounds(const DescribedChain& chain)
    : exact_(exact_chain(chain)), points_(rounding_points(chain, exact_)) {}

FilterChain NodeBounds::cut_behind(const ChainElement& element) const {
    FilterChain cut(exact_.stages.begin(), exact_.stages.begin() + static_cast<std::ptrdiff_t>(element.node.stage) + 1);
    if (auto* cascade = std::get_if<BiquadCascade>(&cut.back().design)) {
        cascade->sections.resize(element.node.section + 1);
    }
    return cut;
}

double NodeBounds::error_through(const FilterChain& cut, const ChainElement& element, bool with_loop,
                                 bool with_output) const {
    // A fir or moving average errs at its result and nowhere before.
    const bool errs_at_result = element.section() == nullptr && !element.is_recursive();
    double error = 0.0;
    for (const RoundingPoint& point : points_) {
        bool counts = is_before(point, element);
        if (is_at(point, element)) {
            counts = point.place == Place::entry || (point.place == Place::loop && with_loop) ||
                     (point.place == Place::behind && (with_output || errs_at_result));
        }
        if (counts) error += point.error.largest() * l1_norm(path_of(point, cut));
    }
    return error;
}

double NodeBounds::error_at_sum(const ChainElement& element, bool with_output) const {
    return error_through(cut_behind(element), element, true, with_output);
}

double NodeBounds::error_at_state(const ChainElement& element) const {
    FilterChain cut = cut_behind(element);
    BiquadSection& s = std::get<BiquadCascade>(cut.back().design).sections.back();
    s = {1.0, 0.0, 0.0, s.a1, s.a2};
    return error_through(cut, element, false, false);
}

double NodeBounds::gain_to_sum(const ChainElement& element) const { return l1_norm(cut_behind(element)); }

double NodeBounds::gain_to_state(const ChainElement& element) const {
    return l1_norm(path_to_state(exact_.stages, element.node));
}

bool NodeBounds::errs_before(const ChainElement& element) const {
    for (const RoundingPoint& point : points_) {
        if (is_before(point, element)) return true;
    }
    return false;
}

}  // namespace halflsb
