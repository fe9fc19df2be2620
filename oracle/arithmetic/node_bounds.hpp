// Level and error at the nodes of a chain. Private to this room.
#pragma once

#include "oracle/arithmetic/chain_elements.hpp"
#include "oracle/arithmetic/rounding_points.hpp"

namespace halflsb {

class NodeBounds {
public:
    explicit NodeBounds(const DescribedChain& chain);

    /// Largest |error| at an element's sum before it leaves; `with_output`: after it was shortened to output words.
    double error_at_sum(const ChainElement& element, bool with_output) const;
    /// At the state of direct-2.
    double error_at_state(const ChainElement& element) const;
    /// Sum |h| from the chain's input.
    double gain_to_sum(const ChainElement& element) const;
    double gain_to_state(const ChainElement& element) const;
    const ExactChain& exact() const { return exact_; }
    const std::vector<RoundingPoint>& points() const { return points_; }

private:
    FilterChain cut_behind(const ChainElement& element) const;
    FilterChain cut_at_state(const ChainElement& element) const;
    double error_through(const FilterChain& cut, const ChainElement& element, bool with_loop, bool with_output) const;

    ExactChain exact_;
    std::vector<RoundingPoint> points_;
};

}  // namespace halflsb
