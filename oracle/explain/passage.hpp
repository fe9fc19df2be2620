// What happens between the samples: how the stream of codes passes the filter, and what becomes of its state. One of
// the slots of a hypothesis. Indices are those of the case, from 0 on; only where one sample comes back for each.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

namespace halflsb {

enum class PassageKind {
    plain,
    late,                   ///< each output is that of `length` calls before; zero codes first
    each_nth,               ///< the filter is called with each `length`-th sample alone, its output repeated
    twice,                  ///< the filter is called `length` times with each sample, its last output returned
    lost,                   ///< at an event the sample does not reach the filter, the output is held
    lost_shifted,           ///< at an event the sample does not reach the filter, what follows moves up by one
    doubled,                ///< at an event the filter gets the sample twice, the second output is returned
    doubled_shifted,        ///< at an event the sample comes twice, what follows is one later
    output_lost,            ///< at an event an output is lost behind the filter, what follows moves up by one
    output_doubled,         ///< at an event an output comes twice behind the filter, what follows is one later
    block_repeated,         ///< from an event on `length` samples are those `delay` before, for the filter
    output_block_repeated,  ///< from an event on `length` outputs are those `delay` before
    block_skipped,          ///< from an event on `length` samples do not reach the filter, outputs as above
    sample_replaced,        ///< at an event the filter gets the lowest code
    state_cleared,          ///< before the sample of an event the state is that of a reset
    state_exchanged,        ///< before the sample of an event the last two words of the state change places
};

/// When an event happens: at `first`, and where `period` is positive at first + period, first + 2 period ...
struct Passage {
    PassageKind kind = PassageKind::plain;
    std::int64_t length = 1;
    std::int64_t first = 0, period = 0;
    std::int64_t delay = 0;  ///< of blocks; 0: `length`
    std::int64_t samples_ago() const { return delay > 0 ? delay : length; }
    bool operator==(const Passage&) const = default;
};

/// The kind has events.
bool has_events(PassageKind kind);
/// Its events go on for `length` samples.
bool has_blocks(PassageKind kind);
/// The next event at or after `index`; a very large number when there is none.
std::int64_t next_event(const Passage& passage, std::int64_t index);

}  // namespace halflsb
