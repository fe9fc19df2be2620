#include "runner/link/ports.hpp"

#include <libserialport.h>

#include <algorithm>
#include <cctype>
#include <charconv>
#include <cstdio>

namespace halflsb {
namespace {

bool is_digit(char c) { return c >= '0' && c <= '9'; }

std::string text_or_empty(const char* text) { return text == nullptr ? "" : text; }

std::optional<int> hex16(std::string_view text) {
    if (text.size() != 4) return std::nullopt;
    int value = 0;
    const auto [end, status] = std::from_chars(text.data(), text.data() + text.size(), value, 16);
    if (status != std::errc{} || end != text.data() + text.size()) return std::nullopt;
    return value;
}

PortInfo describe(sp_port* port) {
    PortInfo info;
    info.device = text_or_empty(sp_get_port_name(port));
    info.description = text_or_empty(sp_get_port_description(port));
    if (sp_get_port_transport(port) != SP_TRANSPORT_USB) return info;
    if (sp_get_port_usb_vid_pid(port, &info.usb_vendor, &info.usb_product) != SP_OK) return info;
    info.usb_serial = text_or_empty(sp_get_port_usb_serial(port));
    info.stable_name = stable_name(info.usb_vendor, info.usb_product, info.usb_serial);
    return info;
}

std::string listing(std::span<const PortInfo> ports) {
    std::string text;
    for (const PortInfo& port : ports) {
        if (!text.empty()) text += ", ";
        text += port.device;
        if (!port.stable_name.empty()) text += " (" + port.stable_name + ")";
    }
    return text;
}

bool matches(const PortInfo& port, const UsbName& name) {
    return port.usb_vendor == name.vendor && port.usb_product == name.product &&
           (name.serial.empty() || port.usb_serial == name.serial);
}

}  // namespace

bool comes_before(std::string_view a, std::string_view b) {
    std::size_t i = 0, k = 0;
    while (i < a.size() && k < b.size()) {
        if (is_digit(a[i]) && is_digit(b[k])) {
            const auto end_of_number = [](std::string_view text, std::size_t at) {
                while (at < text.size() && is_digit(text[at])) ++at;
                return at;
            };
            const auto skip_zeros = [](std::string_view text, std::size_t at, std::size_t end) {
                while (at + 1 < end && text[at] == '0') ++at;
                return at;
            };
            const std::size_t a_end = end_of_number(a, i), b_end = end_of_number(b, k);
            i = skip_zeros(a, i, a_end);
            k = skip_zeros(b, k, b_end);
            if (a_end - i != b_end - k) return a_end - i < b_end - k;
            const int order = a.substr(i, a_end - i).compare(b.substr(k, b_end - k));
            if (order != 0) return order < 0;
            i = a_end;
            k = b_end;
        } else {
            if (a[i] != b[k]) return a[i] < b[k];
            ++i;
            ++k;
        }
    }
    return a.size() - i < b.size() - k;
}

std::string stable_name(int vendor, int product, std::string_view serial) {
    char text[16];
    std::snprintf(text, sizeof text, "usb:%04x:%04x", static_cast<unsigned>(vendor) & 0xffffU,
                  static_cast<unsigned>(product) & 0xffffU);
    std::string name = text;
    if (!serial.empty()) name.append(":").append(serial);
    return name;
}

Outcome<std::vector<PortInfo>> list_ports() {
    sp_port** list = nullptr;
    if (sp_list_ports(&list) != SP_OK)
        return Error{ErrorKind::bench, "serial ports", "the system does not list its serial ports", "is /sys mounted?"};
    std::vector<PortInfo> ports;
    for (sp_port** port = list; *port != nullptr; ++port) ports.push_back(describe(*port));
    sp_free_port_list(list);
    std::sort(ports.begin(), ports.end(),
              [](const PortInfo& a, const PortInfo& b) { return comes_before(a.device, b.device); });
    return ports;
}

Outcome<std::optional<UsbName>> parse_usb_name(std::string_view name) {
    constexpr std::string_view prefix = "usb:";
    if (name.substr(0, prefix.size()) != prefix) return std::optional<UsbName>{};
    const Error malformed{ErrorKind::input, std::string(name),
                          "\"" + std::string(name) + "\" is not a stable name of a serial port",
                          "write usb:VID:PID or usb:VID:PID:SERIAL with four hex digits each, as in "
                          "usb:0403:6001; halflsb ports lists them"};
    const std::string_view rest = name.substr(prefix.size());
    // VVVV:PPPP, then nothing or a colon and at least one character.
    if (rest.size() < 9 || rest[4] != ':') return malformed;
    const std::optional<int> vendor = hex16(rest.substr(0, 4)), product = hex16(rest.substr(5, 4));
    if (!vendor || !product) return malformed;
    UsbName parsed{*vendor, *product, ""};
    if (rest.size() > 9) {
        if (rest[9] != ':' || rest.size() == 10) return malformed;
        parsed.serial = rest.substr(10);
    }
    return std::optional<UsbName>{parsed};
}

Error no_such_port(std::string_view name, std::span<const PortInfo> ports) {
    if (ports.empty())
        return Error{ErrorKind::bench, std::string(name), "no such port; this machine has no serial port now",
                     "plug the board in, and check the cable: some carry power only"};
    return Error{ErrorKind::bench, std::string(name), "no such port; the ports seen: " + listing(ports),
                 "correct port in the rig, or plug the board in; halflsb ports lists the ports"};
}

Outcome<std::string> find_device(std::string_view name, std::span<const PortInfo> ports) {
    const Outcome<std::optional<UsbName>> parsed = parse_usb_name(name);
    if (!parsed) return parsed.error();
    if (!parsed->has_value()) return std::string(name);
    std::vector<PortInfo> found;
    for (const PortInfo& port : ports)
        if (matches(port, **parsed)) found.push_back(port);
    if (found.empty()) return no_such_port(name, ports);
    if (found.size() > 1)
        return Error{ErrorKind::bench, std::string(name), "more than one port has this name: " + listing(found),
                     "add the serial number to port in the rig: usb:VID:PID:SERIAL"};
    return found.front().device;
}

}  // namespace halflsb
