// What samples cost on the framed wire, on paper (docs/wire.md, section 5).
#pragma once

#include <cstddef>
#include <cstdint>

#include "stimuli/sample_format.hpp"

namespace halflsb {

struct WireCost {
    std::int64_t bytes_to_board = 0, bytes_to_host = 0;
};

/// Bytes of one instant, all channels; of `down` instants sent `up` come back.
struct WireInstant {
    std::size_t input_bytes = 0, output_bytes = 0;
    int up = 1, down = 1;
};

/// The most bytes that a stream of so many instants sent needs in each direction without resends, in blocks of
/// `block_samples` and a shorter last one. Where the rate changes, answers are taken to be as equal as they can be.
WireCost wire_cost(std::int64_t samples, std::int64_t block_samples, const WireInstant& instant);

/// The cost of the busier direction as time, 10 bits a byte.
double wire_seconds(const WireCost& cost, long baud);

}  // namespace halflsb
