// A session against the model board over a fake link, and the loop that a caller would run.
#pragma once

#include <memory>
#include <optional>
#include <vector>

#include "runner/wire/framed_wire.hpp"
#include "tests/support/model_board.hpp"

namespace halflsb::test {

inline Code code_at(std::int64_t n) {
    // Any mixture that has zeros, runs of zeros and full-scale values.
    const std::uint64_t z = (static_cast<std::uint64_t>(n) + 1) * 0x9E3779B97F4A7C15ULL;
    if (n % 97 < 11) return 0;
    return static_cast<std::int16_t>(z >> 40);
}

struct Bench {
    FakeClock clock;
    ModelBoard board;
    FakeLink link{clock, board};
    WireLimits limits;
    std::unique_ptr<Wire> wire;

    Wire& session() {
        if (!wire) wire = make_framed_wire(link, clock, limits, 99);
        return *wire;
    }
    Outcome<void> open(std::size_t filter, ReturnedCount returned = {}) {
        const Outcome<Greeting> greeting = session().greet();
        if (!greeting) return greeting.error();
        return session().start(filter, std::move(returned));
    }
};

struct Streamed {
    std::vector<Code> samples;
    std::optional<Error> error;
    std::uint64_t ticks_total = 0;
    std::uint32_t ticks_largest = 0;
    int steps = 0;
    bool is_in_order = true;  ///< each first_index is the number of samples before
};

/// Streams `count` samples of code_at; a reset before each index in `resets`.
inline Streamed stream(Wire& wire, std::int64_t count, const Clock& clock, const std::vector<std::int64_t>& resets = {},
                       bool keeps = true) {
    Streamed result;
    std::int64_t sent = 0, received = 0, returned = 0;
    std::size_t next_reset = 0;
    std::vector<Code> block;
    while (received < count && !result.error) {
        while (const std::size_t room = wire.room_samples()) {
            if (next_reset < resets.size() && resets[next_reset] == sent) {
                wire.send_reset();
                ++next_reset;
                continue;
            }
            std::int64_t length = std::min(static_cast<std::int64_t>(room), count - sent);
            if (next_reset < resets.size()) length = std::min(length, resets[next_reset] - sent);
            if (length == 0) break;
            block.clear();
            for (std::int64_t n = 0; n < length; ++n) block.push_back(code_at(sent + n));
            wire.send(block);
            sent += length;
        }
        const Outcome<Received> step = wire.advance(clock.now() + seconds(0.1));
        if (!step) {
            result.error = step.error();
            break;
        }
        result.is_in_order = result.is_in_order && step->first_index == returned;
        returned += static_cast<std::int64_t>(step->samples.size());
        received += step->answered;
        if (keeps) result.samples.insert(result.samples.end(), step->samples.begin(), step->samples.end());
        result.ticks_total += step->ticks_total;
        result.ticks_largest = std::max(result.ticks_largest, step->ticks_largest);
        // Far more than any fault in these tests needs; a hang would never end.
        if (++result.steps > 2'000'000) result.error = Error{ErrorKind::defect, "test", "the stream does not end", ""};
    }
    return result;
}

inline std::vector<Code> passed(std::int64_t count) {
    std::vector<Code> codes;
    for (std::int64_t n = 0; n < count; ++n) codes.push_back(code_at(n));
    return codes;
}

inline std::vector<Code> summed(std::int64_t count, const std::vector<std::int64_t>& resets = {}) {
    std::vector<Code> codes;
    std::uint32_t sum = 0;
    for (std::int64_t n = 0; n < count; ++n) {
        for (const std::int64_t at : resets)
            if (at == n) sum = 0;
        sum += static_cast<std::uint16_t>(code_at(n));
        codes.push_back(static_cast<std::int16_t>(sum & 0xFFFF));
    }
    return codes;
}

}  // namespace halflsb::test
