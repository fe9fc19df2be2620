// What the board saw, as JSON.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "rigs/virtual-board/paced_line.hpp"

namespace halflsb::board {

/// How long each direction of a paced line had been idle: nothing to take, nothing to send.
struct LineIdle {
    Nanoseconds in_ns = 0, out_ns = 0;
};

/// The blocks between two resets of a filter.
struct Stretch {
    std::string filter;
    std::uint64_t blocks = 0, samples = 0;
    Nanoseconds first_ns = 0, last_ns = 0;  ///< when the first and the last block had arrived
    LineIdle idle_first, idle_last;

    double seconds() const { return static_cast<double>(last_ns - first_ns) * 1e-9; }
    /// Of the time between the first and the last block.
    double input_idle_share() const { return share(idle_last.in_ns - idle_first.in_ns); }
    double output_idle_share() const { return share(idle_last.out_ns - idle_first.out_ns); }
    double share(Nanoseconds idle) const {
        return last_ns > first_ns ? static_cast<double>(idle) / static_cast<double>(last_ns - first_ns) : 0.0;
    }
};

class Statistics {
public:
    void reset(const std::string& filter);
    void block(std::uint64_t samples, Nanoseconds now, const LineIdle& idle);

    std::uint64_t blocks() const { return blocks_; }
    std::uint64_t samples() const { return samples_; }
    /// Stretches with at least one block, the last 1000.
    const std::vector<Stretch>& stretches() const { return stretches_; }

private:
    std::vector<Stretch> stretches_;
    std::uint64_t blocks_ = 0, samples_ = 0;
    std::string filter_;
    bool begins_ = true;
};

struct Account {
    std::string device;
    std::uint32_t baud = 0;
    std::vector<std::string> faults;
    std::uint64_t bytes_in = 0, bytes_out = 0;
};

std::string statistics_json(const Account& account, const Statistics& statistics);
/// Writes beside the file and renames. "" or what went wrong.
std::string write_statistics(const std::string& path, const std::string& json);

}  // namespace halflsb::board
