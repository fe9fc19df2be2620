// The serial link: a real port, or a pseudo-terminal (an emulator, a virtual board).
//
// Always 8 data bits, no parity, 1 stop bit, no flow control, every byte as it is. One program at a
// time: the port is locked (flock, and TIOCEXCL against programs that take no lock).
#pragma once

#include <sys/stat.h>

#include <memory>
#include <string>

#include "runner/link/link.hpp"
#include "runner/world/clock.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

struct SerialPort {
    std::string port;  ///< a device's path, a link to one, or a stable name (link/ports.hpp)
    long baud = 115200;
};

/// Opens and locks the port and discards what it received before. A pseudo-terminal has no line rate:
/// there `baud` only says how long waits may be. `clock` must outlive the link.
/// Errors: kind input: a malformed stable name, a rate of 0 or less; kind bench: no such port (lists
/// the ports seen), no permission (names the group), busy (names the process when the system tells),
/// no terminal, a rate that the port does not reach. On an error nothing was written.
Outcome<std::unique_ptr<Link>> open_serial(const SerialPort& port, const Clock& clock);

/// The text for a port that this user may not open; `status` is the device's.
Error no_permission(const std::string& port, const struct stat& status);

}  // namespace halflsb
