// Whether the last samples of a run repeat, and how soon: exact comparison of codes, in constant memory.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include "stimuli/sample_format.hpp"

namespace halflsb {

/// The smallest p with code[n] = code[n - p] for every n of the stretch that has both, where that is at least half the
/// stretch: it must repeat once in full. By the borders of its prefixes (Knuth, Morris and Pratt 1977); linear in its
/// length.
std::optional<std::int64_t> smallest_period(std::span<const Code> codes);

/// Looks at the last half of all samples, and at no more than the last `most_samples`, so a period is up to 512.
class PeriodWatch {
public:
    static constexpr std::size_t most_samples = 1024;

    void add(std::span<const Code> codes);
    std::int64_t samples() const { return samples_; }
    /// In the order in which they came.
    std::vector<Code> last_stretch() const;

private:
    std::vector<Code> recent_;  ///< a ring, the oldest at samples_ % most_samples once it is full
    std::int64_t samples_ = 0;
};

}  // namespace halflsb
