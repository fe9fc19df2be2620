// Every place where a described chain of integers shortens something: how large the error is that it makes there, and
// by which way that error reaches the output.
//
// The response is the exact chain (exact_chain.hpp) of the same input plus, for each of these points, its errors
// through its path: a linear identity, no model, as long as no node overflows (rail_watch.hpp). docs/methods.md,
// "Derived limits", has the derivation; docs/arithmetic.md defines where things are shortened.
#pragma once

#include "oracle/arithmetic/exact_chain.hpp"
#include "oracle/arithmetic/rounding_error.hpp"
#include "oracle/filters/node_path.hpp"

namespace halflsb {

struct RoundingPoint {
    /// Where its error comes in. `loop`: at the summing point, so it comes back through the feedback; `entry`: as if
    /// the input of the section had it (the state of direct-2); `behind`: in a copy of the result.
    enum class Place { loop, entry, behind };

    std::string name;       ///< "stage 1, section 2, sum"
    std::size_t stage = 0;  ///< of the description
    FilterNode node = {};   ///< in the exact chain; in_feedback as `place` has it
    Place place = Place::behind;
    double step = 1.0;            ///< the last place kept, as a value
    double coarsest_step = 0.0;   ///< of the words on the way here, by the bits that they use
    double parts = 1.0;           ///< remainders are multiples of step / parts, the finest of them; may be infinite
    int count = 1;                ///< errors a sample: products that are shortened each by itself
    RoundingError error = {};     ///< of all of them in one sample, as values
    double variance_each = 0.0;   ///< of one of them, the largest
    bool is_float = false;        ///< errors of float32 operations: step is 2^-24 of the largest number
    bool is_of_input = false;     ///< what comes in, or products of it, is shortened: of silence nothing is lost
    bool saves_fraction = false;  ///< what is dropped goes into the next sum: the path has a factor 1 - z^-1
    FilterChain from_input = {};  ///< from the chain's input to the number that is shortened, but for:
    double factor = 1.0;          ///< of a product its smallest coefficient
    /// From the chain's input to how far the part that is dropped moves from one sample to the next, whole steps aside.
    /// Empty: nothing says, and the number that is shortened stands for it.
    FilterChain remainder = {};
    FilterChain inside = {};      ///< what the error passes before it comes out at the node: registers of a CIC
};

/// In the order of the signal. Stages of float32 have none here (float_points.hpp). Fewer remainders count where the
/// coefficients have common powers of two or the words are narrow: a point that can make no error is left out.
std::vector<RoundingPoint> rounding_points(const DescribedChain& chain, const ExactChain& exact);

/// What the error of a point becomes at the end of `chain`, which is the exact one or one that ends earlier.
FilterChain path_of(const RoundingPoint& point, const FilterChain& chain);

}  // namespace halflsb
