// The declared reference of one element: its exact filter, with its words' ends where they are fed back and where they
// leave. Private to this room.
#pragma once

#include <memory>
#include <optional>
#include <span>
#include <vector>

#include "oracle/arithmetic/chain_elements.hpp"

namespace halflsb {

/// What becomes of a value beyond the ends of a word; a value between its codes stays.
class ValueEnds {
public:
    explicit ValueEnds(const Word& word);
    double operator()(double value) const;

private:
    double lowest_, highest_, full_scale_;
    bool wraps_;
};

/// Ends of a word that limits nothing are none.
std::optional<ValueEnds> ends_of(const Word& word);

class ElementFilter {
public:
    explicit ElementFilter(const ChainElement& element);
    void reset();
    std::size_t outputs_for(std::size_t inputs) const;
    /// `sums`: what the sum comes to before anything holds it. `held`: what a loop feeds back. `out`: what leaves the
    /// element. These have outputs_for(in.size())
    /// values; no spans overlap.
    void process(std::span<const double> in, std::span<double> sums, std::span<double> held, std::span<double> out);

private:
    void run_clipped(std::span<const double> in, std::span<double> sums, std::span<double> held);

    std::unique_ptr<Filter> exact_;
    std::optional<ValueEnds> state_ends_, out_ends_;
    // Of a loop whose state is clipped: s[n] = clip(b0 x[n] + b1 x[n-D] + b2 x[n-2] - a s[n-D]).
    bool feeds_back_clipped_ = false;
    double b0_ = 1.0, b1_ = 0.0, b2_ = 0.0, a_ = 0.0;
    std::vector<double> past_in_, past_state_;  ///< rings of D samples, at least 2 of inputs of a section
    std::size_t place_ = 0, delay_ = 1;
    double older_in_ = 0.0;
};

}  // namespace halflsb
