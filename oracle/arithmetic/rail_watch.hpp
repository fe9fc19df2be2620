// Where derived limits hold: as long as |reference| + bound stays inside the ends of every word on the way.
//
// The watch runs the declared reference of the same input, node by node, and looks at each node that has words which
// the signal could fill. What a reached rail means depends on what comes behind it (docs/methods.md, "Rails"):
//
//   clip    the reference clips at the same place and no error can grow by it: the output's own saturation, a fir or a
//           moving average that saturates before anything else has erred, a loop of first order that is the whole chain
//           and feeds back its clipped state. The largest error still holds; rms and bias only as worst cases.
//   exempt  a filter without feedback wraps, or sums with saturation: nothing is claimed of the outputs that this
//   sample
//           reaches, as many as what follows remembers.
//   lost    a state is wrong, and what it becomes is not known: nothing is claimed from here on.
//
// Nodes whose worst case, sum |h| x full scale + bound, lies inside their rails are not run. Any split into blocks
// gives the same answers.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

enum class RailEffect { clip, exempt, lost };
std::string_view name_of(RailEffect effect);

/// A node with words, as a table of headroom shows it. Values are those of the chain's input.
struct RailNode {
    std::string name;  ///< "stage 1, section 2, state"
    Word word;
    double worst_case = 0.0;  ///< the largest |value| that a full-scale input can give, without the error
    double error = 0.0;       ///< bound of the error there
    RailEffect effect = RailEffect::lost;
    bool is_watched = false;  ///< worst_case + error reaches the rails
};

class RailWatch {
public:
    /// Reads what it needs of `chain`.
    explicit RailWatch(const DescribedChain& chain);
    ~RailWatch();
    RailWatch(RailWatch&&) noexcept;
    RailWatch& operator=(RailWatch&&) noexcept;

    void reset();
    /// How many outputs the next `inputs` samples give: `inputs` unless the rate changes.
    std::size_t outputs_for(std::size_t inputs) const;
    /// Values of the next input words. exempt[i] becomes 1 where nothing is claimed of output i, else 0;
    /// exempt.size() == outputs_for(in.size()).
    void add(std::span<const double> in, std::span<std::uint8_t> exempt);

    /// The first output of which nothing is claimed; from lost_from() on nothing is of any.
    std::optional<std::int64_t> first_unsafe_index() const;
    std::optional<std::int64_t> lost_from() const;
    /// The first output from which rms and bias hold as worst cases only: a rail was, or may have been, reached.
    std::optional<std::int64_t> first_clip_index() const;
    /// The node that first_unsafe_index() speaks of, "" without.
    std::string unsafe_node() const;

    const std::vector<RailNode>& nodes() const;

private:
    class Pass;
    std::unique_ptr<Pass> pass_;
};

}  // namespace halflsb
