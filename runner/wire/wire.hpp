// Samples to and from a board, over a link. The framed wire (docs/wire.md) is the first; the loop that
// feeds it belongs to the caller, so that a run can stop as soon as its rules are decided.
#pragma once

#include <cstdint>
#include <functional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "runner/wire/wire_cost.hpp"
#include "runner/world/clock.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

enum class Injection : std::uint8_t { call = 0, buffer = 1, converter = 2 };
std::string_view name_of(Injection injection);

struct BoardFilter {
    std::string name;
    Injection injection = Injection::call;
    SampleFormat input, output;
    int channels_in = 1, channels_out = 1;
    int nodes = 0, tables = 0;
    /// After `down` instants sent `up` have come back, and the pattern of the rate begins anew; 1 and 1 where it does
    /// not change.
    int up = 1, down = 1;
};

/// What an instant of it takes on the line.
WireInstant instant_of(const BoardFilter& filter);

struct BoardSetting {
    std::string name;
    std::int32_t minimum = 0, maximum = 0, value = 0;
};

/// What a board says of itself.
struct Greeting {
    int protocol = 0;
    std::string build_id;  ///< lower-case hex; "" when it has none
    std::string serial;
    std::vector<BoardFilter> filters;
    std::vector<BoardSetting> settings;
    int max_block_samples = 0;
    int credit_blocks = 0;
    std::uint32_t tick_hz = 0;
    int tick_bits = 0;
};

/// How many instants have come back once so many were sent, counted from start() or the last reset.
using ReturnedCount = std::function<std::int64_t(std::int64_t sent)>;

/// The answer to one block.
struct AnsweredBlock {
    std::int64_t samples = 0;  ///< sent
    std::uint32_t ticks_total = 0, ticks_largest = 0;
    Duration round_trip{};  ///< from when the block was ready to go to when its answer was there
};

/// What one step of the stream brought, in order; samples may be empty.
struct Received {
    std::int64_t first_index = 0;  ///< of the samples returned, counted from start()
    std::vector<Code> samples;
    std::int64_t answered = 0;        ///< instants sent whose answers these are
    std::uint64_t ticks_total = 0;    ///< of those answered
    std::uint32_t ticks_largest = 0;  ///< of one sample
    std::vector<AnsweredBlock> blocks;
};

/// The board's own counters, differences since start() or settle().
struct BoardCounters {
    std::uint32_t frames_bad = 0, bytes_lost = 0, gaps = 0, resent = 0, blocks = 0;
};

struct WireFigures {
    std::int64_t bytes_sent = 0, bytes_received = 0;  ///< since start() or settle(), like all of these
    std::int64_t frames_bad = 0;                      ///< arrived broken at the host
    std::int64_t resends = 0;                         ///< times the host sent again
    Duration streaming{};                             ///< from the first sample sent to the last received
};

struct WireLimits {
    Duration greet = seconds(5.0);   ///< for the whole greeting; HELLO is repeated meanwhile
    Duration answer = seconds(2.0);  ///< without any good frame while answers are due
    /// Without progress before sending again; 3 round trips of what is in flight are added, but two resends fit
    /// into `answer`.
    Duration resend = seconds(0.25);
    int block_samples = 256;  ///< asked for; less when the board holds less
};

class Wire {
public:
    virtual ~Wire() = default;
    virtual Outcome<Greeting> greet() = 0;
    /// Opens a stream on that filter of the greeting, from reset, sample index 0. A board that returns another number
    /// of samples than `returned` says has broken the stream; by default one comes back for each.
    virtual Outcome<void> start(std::size_t filter_number, ReturnedCount returned = {}) = 0;
    /// A stream on that filter is open and whole, so that a case can go on where the one before ended.
    virtual bool is_streaming(std::size_t filter_number) const = 0;
    /// Waits until everything sent is answered, settings and resets too, and begins figures() and counters() anew:
    /// a case that goes on in the stream of the one before has its own. Errors as of advance().
    virtual Outcome<void> settle() = 0;
    /// How many samples send() takes now: 0 without credit, else at most a block. A sample is one instant:
    /// with several channels it has a code for each, adjacent.
    virtual std::size_t room_samples() const = 0;
    /// Takes 1 to room_samples() samples; more is an Error (kind defect) of the next advance().
    virtual void send(std::span<const Code> samples) = 0;
    /// Resets the filter before the next sample sent. Needs room_samples() > 0.
    virtual void send_reset() = 0;
    /// Changes a setting of the greeting before the next sample sent; a value outside its range is an Error of the
    /// next advance(). Needs room_samples() > 0.
    virtual void send_setting(std::size_t setting_number, std::int32_t value) = 0;
    /// Moves bytes until answers arrived (all that are there, in order), or until `until` passes, or
    /// until credit came back. Every wait has a deadline: Error kind bench when the board is silent,
    /// refuses, or was restarted; the problem says what was awaited, how long, and what came instead.
    /// With nothing in flight it returns at once. After an Error every call gives that Error.
    virtual Outcome<Received> advance(Instant until) = 0;
    virtual Outcome<BoardCounters> counters() = 0;
    virtual WireFigures figures() const = 0;
    /// For reports: the most bytes that a stream of so many samples sent needs in each direction without resends,
    /// in blocks as they were granted. Exact while a frame's content is under 254 bytes; above that each zero
    /// byte among the samples may save one (COBS).
    virtual std::int64_t bytes_to_board(std::int64_t samples) const = 0;
    virtual std::int64_t bytes_to_host(std::int64_t samples) const = 0;
};

}  // namespace halflsb
