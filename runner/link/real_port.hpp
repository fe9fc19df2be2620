// Settings of a real serial port, by libserialport.
#pragma once

#include <string>

#include "stimuli/outcome.hpp"

namespace halflsb {

/// Sets 8N1, no flow control, the rate, and blocking reads of at least one byte on the port that `fd`
/// has open already (settings belong to the device, not to a descriptor). `port` is what messages call it.
Outcome<void> configure_real_port(const std::string& port, const std::string& device, int fd, long baud);

}  // namespace halflsb
