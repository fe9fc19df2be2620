#include "oracle/arithmetic/node_bounds.hpp"

#include "oracle/arithmetic/float_points.hpp"
#include "oracle/arithmetic/reference_error.hpp"

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
    : exact_(exact_chain(chain)), points_(rounding_points(chain, exact_)) {
    // Of no record is a length known here; none is longer.
    constexpr std::int64_t longest = std::int64_t{1} << 24;
    for (RoundingPoint& point : float_points(chain, exact_, {longest, largest_value(chain.stages.front().in)})) {
        points_.push_back(std::move(point));
    }
}

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
    const bool errs_at_result = !element.has_sums() && element.comb() == nullptr;
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

FilterChain NodeBounds::cut_at_state(const ChainElement& element) const {
    FilterChain cut = cut_behind(element);
    const FilterChain loop = element.loop();
    if (auto* cascade = std::get_if<BiquadCascade>(&cut.back().design)) {
        cascade->sections.back() = std::get<BiquadCascade>(loop.front().design).sections.front();
    } else {
        cut.back().design = loop.front().design;
    }
    return cut;
}

double NodeBounds::error_at_state(const ChainElement& element) const {
    return error_through(cut_at_state(element), element, false, false);
}

double NodeBounds::gain_to_sum(const ChainElement& element) const { return l1_norm(cut_behind(element)); }

double NodeBounds::gain_to_state(const ChainElement& element) const { return l1_norm(cut_at_state(element)); }

}  // namespace halflsb
