// What samples cost on the framed wire, on paper (docs/wire.md, section 5).
#pragma once

#include <cstddef>
#include <cstdint>

#include "stimuli/sample_format.hpp"

namespace halflsb {

struct WireCost {
    std::int64_t bytes_to_board = 0, bytes_to_host = 0;
};

/// The most bytes that a stream of so many samples of one channel needs in each direction without resends, in
/// blocks of `block_samples` and a shorter last one.
WireCost wire_cost(std::int64_t samples, std::int64_t block_samples, std::size_t input_bytes, std::size_t output_bytes);

/// The cost of the busier direction as time, 10 bits a byte.
double wire_seconds(const WireCost& cost, long baud);

}  // namespace halflsb
