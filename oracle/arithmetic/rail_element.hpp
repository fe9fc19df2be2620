// The rails of one element, and what reaches them. Private to this room.
#pragma once

#include <span>
#include <vector>

#include "oracle/arithmetic/element_filter.hpp"
#include "oracle/arithmetic/node_bounds.hpp"
#include "oracle/arithmetic/rail_watch.hpp"

namespace halflsb {

/// What an element gets: its largest |value| by words or worst case, and the largest error of it.
struct ElementInput {
    double level = 0.0, error = 0.0;
    bool is_clipped = false;  ///< an element before may clip: the worst case is no longer that of one linear path
    double full_scale = 0.0;  ///< of the chain's input
};

/// Elements that change the rate, and medians, are looked at at their output alone.
class RailElement {
public:
    RailElement(const ChainElement& element, const NodeBounds& bounds, const ElementInput& input, bool is_only_one,
                bool behind_can_forget);

    bool is_watched() const;
    const std::vector<RailNode>& nodes() const { return nodes_; }
    /// What the next element gets.
    ElementInput output() const { return output_; }

    void reset();
    std::size_t outputs_for(std::size_t inputs) const { return filter_.outputs_for(inputs); }
    /// reached[n]: 1 + index of the gravest node that output n of the element may reach, 0 for none. No spans overlap.
    void process(std::span<const double> in, std::span<double> out, std::span<std::uint8_t> reached);

private:
    /// What a rail looks at.
    enum class Source {
        sum,          ///< before anything holds it
        held,         ///< the sum as a loop feeds it back
        input,        //
        window,       ///< the sum of a moving average or a CIC, not divided
        window_rest,  ///< less the oldest, before the newest comes
        state,        ///< of direct-2
        transposed,   ///< a state of transposed-2
        product,      ///< of a one-pole by difference
        partial,      ///< each partial sum
    };
    struct Place {
        Source source = Source::sum;
        std::size_t index = 0;  ///< of a state of transposed-2, from 1
    };
    struct PartialTerm {
        double coefficient = 1.0;
        std::size_t delay = 0;
        Place of = {Source::input};
    };
    struct Rail {
        Place place = {};
        double lowest = 0.0, highest = 0.0;  ///< narrowed by the error
        std::vector<PartialTerm> terms;      ///< of a partial sum, in the order in which they are added
    };

    void of_fir(const Fir& fir);
    void of_average(int points);
    void of_loop();
    void of_direct_2();
    void of_transposed();
    void of_rate_changer(const FilterDesign& design);
    void add_output(double error, bool comes_back);

    Word accumulator(int terms, int target) const;
    std::vector<PartialTerm> forward_terms(Place of) const;
    RailEffect behind() const { return behind_can_forget_ ? RailEffect::exempt : RailEffect::lost; }
    void add_sum(const std::string& name, const Word& word, Place place, double worst, double error, RailEffect effect,
                 std::vector<PartialTerm> terms);
    void add(const std::string& name, const Word& word, Place place, double worst, double error, RailEffect effect,
             std::vector<PartialTerm> terms = {});
    double level_of(Place place) const;
    double error_of(Place place) const;
    double value_at(Place place, std::size_t n) const;
    /// b_k, a_k; 0 beyond the last one. Of a one-pole b_0 is its k.
    double forward(std::size_t k) const { return k < element_.forward.size() ? element_.forward[k] : 0.0; }
    double feedback(std::size_t k) const { return k - 1 < element_.feedback.size() ? element_.feedback[k - 1] : 0.0; }
    std::size_t order() const;
    bool leaves_rail(const Rail& rail, std::size_t n) const;

    const ChainElement element_;
    bool is_only_one_, behind_can_forget_;
    ElementInput input_, output_;
    double sum_level_ = 0.0, sum_error_ = 0.0, out_error_ = 0.0, state_level_ = 0.0, state_error_ = 0.0;
    std::vector<RailNode> nodes_;
    std::vector<Rail> rails_;  ///< one for one with nodes_
    ElementFilter filter_;
    std::unique_ptr<Filter> state_filter_;  ///< of direct-2
    double points_over_gain_ = 1.0;         ///< what such a sum is divided by

    std::size_t reach_back_ = 2;              ///< samples of the past that partial sums look at
    std::vector<double> in_, sums_, states_;  ///< with the past in front; states of a loop: what it holds
};

}  // namespace halflsb
