// A pseudo-terminal that stays: the board's side is open for as long as the program runs, hosts come and go.
#pragma once

#include <string>

namespace halflsb::board {

class PseudoTerminal {
public:
    PseudoTerminal() = default;
    ~PseudoTerminal();
    PseudoTerminal(const PseudoTerminal&) = delete;
    PseudoTerminal& operator=(const PseudoTerminal&) = delete;

    /// "" or what went wrong. `link`: a symbolic link to make, removed at the end; "" for none. An old link of that
    /// name is replaced, anything else is not.
    std::string open(const std::string& link);
    /// The board's side; does not block.
    int descriptor() const { return board_side_; }
    const std::string& device() const { return device_; }

    /// Readable when a host has closed the device; -1 when the system cannot tell.
    int closings() const { return closings_; }
    /// Takes back a host's claim (TIOCEXCL), which would outlive it because the device stays open here.
    void forget_claim() const;

private:
    int board_side_ = -1, closings_ = -1;
    int host_side_ = -1;  // held open: without it the board's side reports an error between two hosts
    std::string device_, link_;
};

}  // namespace halflsb::board
