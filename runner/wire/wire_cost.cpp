#include "runner/wire/wire_cost.hpp"

#include <algorithm>

#include "runner/wire/frame.hpp"
#include "runner/wire/messages.hpp"

namespace halflsb {
namespace {

std::int64_t bytes_of_stream(std::int64_t samples, std::int64_t block, std::size_t fixed,
                             std::size_t bytes_per_sample) {
    if (samples <= 0 || block <= 0) return 0;
    const auto frame = [&](std::int64_t count) {
        return static_cast<std::int64_t>(
            largest_frame_bytes(fixed + static_cast<std::size_t>(count) * bytes_per_sample));
    };
    const std::int64_t rest = samples % block;
    return samples / block * frame(block) + (rest > 0 ? frame(rest) : 0);
}

}  // namespace

WireCost wire_cost(std::int64_t samples, std::int64_t block_samples, std::size_t input_bytes,
                   std::size_t output_bytes) {
    return {bytes_of_stream(samples, block_samples, message::samples_fixed_bytes, input_bytes),
            bytes_of_stream(samples, block_samples, message::response_fixed_bytes, output_bytes)};
}

double wire_seconds(const WireCost& cost, long baud) {
    constexpr double bits_per_byte = 10.0;  // start, 8 data, stop
    return static_cast<double>(std::max(cost.bytes_to_board, cost.bytes_to_host)) * bits_per_byte /
           static_cast<double>(baud);
}

}  // namespace halflsb
