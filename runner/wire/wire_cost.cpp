#include "runner/wire/wire_cost.hpp"

#include <algorithm>

#include "runner/wire/frame.hpp"
#include "runner/wire/messages.hpp"

namespace halflsb {
namespace {

std::int64_t frame_bytes(std::size_t fixed, std::int64_t instants, std::size_t bytes_per_instant) {
    return static_cast<std::int64_t>(
        largest_frame_bytes(fixed + static_cast<std::size_t>(instants) * bytes_per_instant));
}

std::int64_t bytes_of_stream(std::int64_t samples, std::int64_t block, std::size_t fixed,
                             std::size_t bytes_per_instant) {
    const std::int64_t rest = samples % block;
    return samples / block * frame_bytes(fixed, block, bytes_per_instant) +
           (rest > 0 ? frame_bytes(fixed, rest, bytes_per_instant) : 0);
}

std::int64_t bytes_of_answers(std::int64_t samples, std::int64_t block, const WireInstant& instant) {
    const std::size_t fixed = message::response_fixed_bytes;
    if (instant.up == instant.down) return bytes_of_stream(samples, block, fixed, instant.output_bytes);
    const std::int64_t answers = (samples + block - 1) / block;
    const std::int64_t returned = (samples * instant.up + instant.down - 1) / instant.down;
    const std::int64_t fewer = returned / answers, longer_answers = returned % answers;
    return (answers - longer_answers) * frame_bytes(fixed, fewer, instant.output_bytes) +
           longer_answers * frame_bytes(fixed, fewer + 1, instant.output_bytes);
}

}  // namespace

WireCost wire_cost(std::int64_t samples, std::int64_t block_samples, const WireInstant& instant) {
    if (samples <= 0 || block_samples <= 0) return {};
    return {bytes_of_stream(samples, block_samples, message::samples_fixed_bytes, instant.input_bytes),
            bytes_of_answers(samples, block_samples, instant)};
}

double wire_seconds(const WireCost& cost, long baud) {
    constexpr double bits_per_byte = 10.0;  // start, 8 data, stop
    return static_cast<double>(std::max(cost.bytes_to_board, cost.bytes_to_host)) * bits_per_byte /
           static_cast<double>(baud);
}

}  // namespace halflsb
