// The loop between the pseudo-terminal and the board, in the time of the line.
#pragma once

#include <string>

#include "rigs/virtual-board/board.hpp"
#include "rigs/virtual-board/pseudo_terminal.hpp"

namespace halflsb::board {

/// From here on SIGTERM, SIGINT and SIGHUP end serve(), SIGUSR1 writes the statistics; until serve() runs they wait.
void take_signals();

/// Until a signal, or until an unplug fault. "" or what went wrong.
std::string serve(const PseudoTerminal& terminal, Board& board, const Options& options, const Faults& faults);

}  // namespace halflsb::board
