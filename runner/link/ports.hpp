// The serial ports of this machine, and names for them that survive unplugging and renumbering.
//
// A stable name is "usb:VID:PID" or "usb:VID:PID:SERIAL": vendor and product in hex, as in
// "usb:0403:6001:A50285BI". Pseudo-terminals are never listed: they have no name that lasts.
#pragma once

#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "stimuli/outcome.hpp"

namespace halflsb {

struct PortInfo {
    std::string device;       ///< "/dev/ttyUSB0"
    std::string stable_name;  ///< "usb:0403:6001:A50285BI"; "" when it is not a USB port
    std::string description;  ///< what the adapter calls itself; "" when it says nothing
    int usb_vendor = -1, usb_product = -1;
    std::string usb_serial;
};

/// What is plugged in now, in the order that people count: ttyUSB2 before ttyUSB10.
/// Errors (kind bench): the system cannot be asked.
Outcome<std::vector<PortInfo>> list_ports();

/// A stable name taken apart. Empty serial: any.
struct UsbName {
    int vendor = 0, product = 0;
    std::string serial;
};
/// Nothing when `name` does not start with "usb:"; an Error (kind input) when it does and is malformed.
Outcome<std::optional<UsbName>> parse_usb_name(std::string_view name);
std::string stable_name(int vendor, int product, std::string_view serial);

/// The device of a port's name: a path is returned as it is, a stable name is looked up among `ports`.
/// Errors: malformed (input), no such port, or more than one (bench); the texts list the ports seen.
Outcome<std::string> find_device(std::string_view name, std::span<const PortInfo> ports);

/// "no such port", with the ports that are there.
Error no_such_port(std::string_view name, std::span<const PortInfo> ports);

/// True when `a` comes before `b` with digits read as numbers.
bool comes_before(std::string_view a, std::string_view b);

}  // namespace halflsb
