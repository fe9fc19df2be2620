// The impulse response of a chain, piece by piece, with a proven bound of all that is still to come: for sums over a
// response without end.
//
// Where the rate changes, the unit sample may stand at any input of the rate cycle (rates.hpp): each has a response of
// its own.
//
// The bound follows the states. For each stage in turn let U be a bound of sum |x| over its coming inputs, S_x and
// S_y the sums of |x| and |y| over as much of the past as it remembers. Then sum |y| over its coming outputs is at
// most gain U + of_past_in S_x + of_past_out S_y (memory.hpp), which is U of the next stage. Only + - * / and sqrt
// are used: the same figures on every machine. Rounding moves them by far less than 2^-20.
#pragma once

#include <array>
#include <cstddef>
#include <memory>
#include <span>
#include <vector>

#include "oracle/filters/filter.hpp"
#include "oracle/filters/memory.hpp"

namespace halflsb {

class ImpulseRun {
public:
    static constexpr std::size_t piece_samples = 1024;

    /// A linear chain. `phase`: input index of the unit sample, not 0 only where the rate changes.
    explicit ImpulseRun(const FilterChain& chain, std::size_t phase = 0);
    /// What the next piece_samples inputs give; good until the next call.
    std::span<const double> next();
    /// At least the sum of |h| after the pieces taken. Infinite where the states are too large to say.
    double rest() const;

private:
    struct Part {
        std::unique_ptr<Filter> filter;
        Memory memory;
        PastSum past_in, past_out;
    };

    std::vector<double> source_;  ///< the taps of the longest FIR, the first of the (commuting) stages; or a 1
    double source_rest_ = 0.0;    ///< sum of their sizes, of those to come
    std::size_t source_at_ = 0;
    std::vector<Part> parts_;
    std::array<std::vector<double>, 2> pieces_;  ///< in turn what goes into a part and what comes out
};

/// Sum of |h| over a piece.
double sum_of_sizes(std::span<const double> piece);

}  // namespace halflsb
