// How far a hypothesis reproduces what came back, sample for sample.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "oracle/explain/hypothesis.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

/// What one channel got and returned in one case; cases in the order in which they were streamed.
struct ChannelCapture {
    std::string case_name;
    Start start = Start::reset;
    std::int64_t start_samples = 0;  ///< zeros that flushed, or samples of a running case that say nothing
    std::vector<Code> sent, response;
};

struct CaptureFit {
    std::int64_t compared = 0;  ///< samples looked at
    std::int64_t equal = 0;     ///< of these, those before the first that differs
    /// The first sample that differs, in the order in which cases were looked at; case -1: none does.
    int wrong_case = -1;
    std::int64_t wrong_index = -1;
    bool could_run = false;  ///< there is a twin of the description
    bool is_exact() const { return could_run && wrong_case < 0; }
};

struct Candidate {
    Hypothesis hypothesis;
    CaptureFit fit;  ///< until its first wrong sample
};

/// The order in which cases are looked at: those that tell most at the least cost come first.
class CaptureSet {
public:
    CaptureSet(const Signal& signal, std::vector<ChannelCapture> captures);

    const Signal& signal() const { return signal_; }
    const std::vector<ChannelCapture>& captures() const { return captures_; }
    /// Of all responses.
    std::int64_t samples() const;

    /// Up to the first sample that differs.
    CaptureFit until_first_wrong(const BoardDescription& board) const;
    /// Of one case alone, from a reset; only where no case hangs on the one before.
    CaptureFit until_first_wrong_in(std::size_t index, const BoardDescription& board) const;
    /// The case whose stimulus moves by most different steps: what happens at some samples alone is seen there at once.
    /// None where cases hang on each other.
    std::optional<std::size_t> liveliest() const;
    /// The board as declared decides what is looked at first: the cases where it goes wrong soonest.
    void order_by(const BoardDescription& declared);
    /// The cases with most different codes at their start first: of a board that nobody described.
    void order_by_variety();
    /// How far a board is from the captures, at the start of each: the sum over the cases of log2 of the rms error in
    /// LSB, none below 2^-16. Infinite where there is no twin.
    double miss_octaves(const BoardDescription& board) const;
    /// Of the case alone that is looked at first.
    double first_miss_octaves(const BoardDescription& board) const;
    /// What miss_octaves gives where nothing differs.
    bool is_exact_start(double miss_octaves) const;

private:
    double miss_of(const BoardDescription& board, std::size_t cases) const;

    Signal signal_;
    std::vector<ChannelCapture> captures_;
    std::vector<std::size_t> order_;
    bool is_chained_ = false;  ///< some case goes on in the state of the one before
};

}  // namespace halflsb
