#include "runner/case_cost.hpp"

#include "oracle/judge/companion_case.hpp"

namespace halflsb {
namespace {

std::int64_t flush_samples(const Case& the_case) { return the_case.start == Start::flush ? the_case.start_samples : 0; }

}  // namespace

std::int64_t sent_samples(const Case& the_case) {
    return flush_samples(the_case) + the_case.stimulus->length_samples();
}

WireCost case_cost(const Case& the_case, std::int64_t granted_samples, const WireInstant& instant) {
    const std::int64_t block = sent_block_samples(the_case, granted_samples);
    // A flush travels in blocks as they were granted.
    if (block == granted_samples) return wire_cost(sent_samples(the_case), granted_samples, instant);
    WireCost cost = wire_cost(the_case.stimulus->length_samples(), block, instant);
    const WireCost flush = wire_cost(flush_samples(the_case), granted_samples, instant);
    cost.bytes_to_board += flush.bytes_to_board;
    cost.bytes_to_host += flush.bytes_to_host;
    return cost;
}

}  // namespace halflsb
