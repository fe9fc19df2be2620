// The filters that this board offers, chosen by name, with the faults built in.
#pragma once

#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "rigs/virtual-board/fault_catalogue.hpp"

namespace halflsb::board {

/// What the board calls: the clean filter itself, or one with faults around it.
class OfferedFilter {
public:
    explicit OfferedFilter(FilterParts parts, const Faults& faults);
    const FilterParts& parts() const { return parts_; }
    void reset();
    /// `out` may be `in`, or overlap it as the kit's answers do.
    void process(const void* in, void* out, std::uint16_t count);
    /// Of a filter that changes the rate, in its place: how many were written.
    std::uint16_t process_rate(const void* in, void* out, std::uint16_t count);
    bool load(std::uint8_t table, std::uint16_t offset, const std::int32_t* values, std::uint8_t count);

private:
    FilterParts parts_;
    std::vector<std::unique_ptr<CodeFilter>> faulty_;  // one a channel; none: the filter is right
    ChannelFaults channel_faults_;
    Format out_format_;
};

/// `choice`: "all" (without the next two), "cw-7", "decisions", "rates", or names with commas between. An empty list:
/// no such filter, and `problem` says so.
std::vector<FilterParts> choose_filters(std::string_view choice, std::vector<FilterParts> all, std::string& problem);

}  // namespace halflsb::board
