// Keeps the codes around the first sample that is beyond a limit, for the report.
#pragma once

#include <cstdint>
#include <optional>
#include <span>

#include "oracle/judge/verdict.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// Samples that a report shows on either side of a bad one.
inline constexpr std::int64_t shown_neighbours = 4;

/// The reference on the scale of the response's codes, so that the two can be compared by eye: in LSB, and for
/// offset binary counted from code 0 as the codes are (mid-code = silence). Values themselves for f32.
class CodeScale {
public:
    explicit CodeScale(const SampleFormat& output);
    double of_value(double value) const { return value / step_ + zero_; }

private:
    double step_, zero_;
};

class FirstBadWatch {
public:
    explicit FirstBadWatch(const SampleFormat& output) : scale_(output) {}
    /// Spans of one length. `first_beyond` as the error measure has it after this block; -1 while there is none.
    void add(std::int64_t first_index, std::span<const Code> stimulus, std::span<const double> reference,
             std::span<const Code> response, std::int64_t first_beyond);
    const std::optional<Neighbourhood>& found() const { return found_; }

private:
    CodeScale scale_;
    std::optional<Neighbourhood> found_;
    Neighbourhood recent_;  ///< the last samples seen while nothing is found
};

}  // namespace halflsb
