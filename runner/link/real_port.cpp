#include "runner/link/real_port.hpp"

#include <libserialport.h>
#include <linux/serial.h>
#include <sys/ioctl.h>
#include <termios.h>

#include <cstdlib>
#include <memory>

namespace halflsb {
namespace {

struct FreePort {
    void operator()(sp_port* port) const { sp_free_port(port); }
};
struct ClosePort {
    void operator()(sp_port* port) const { sp_close(port); }
};
struct FreeConfig {
    void operator()(sp_port_config* config) const { sp_free_config(config); }
};

std::string last_text() {
    char* text = sp_last_error_message();
    const std::string copy = text == nullptr ? "unknown reason" : text;
    sp_free_error_message(text);
    return copy;
}

Error refused(const std::string& port, const std::string& what) {
    return Error{ErrorKind::bench, port, "the port refused " + what + ": " + last_text(), ""};
}

/// The rate that the driver really set; 0 when it does not tell.
long baud_now(sp_port* port) {
    sp_port_config* raw = nullptr;
    if (sp_new_config(&raw) != SP_OK) return 0;
    const std::unique_ptr<sp_port_config, FreeConfig> config(raw);
    int baud = 0;
    if (sp_get_config(port, raw) != SP_OK || sp_get_config_baudrate(raw, &baud) != SP_OK) return 0;
    return baud > 0 ? baud : 0;
}

/// Some adapters hold received bytes back for 16 ms; ask for none of that, as far as the driver can.
void ask_for_low_latency(int fd) {
    serial_struct settings{};
    if (ioctl(fd, TIOCGSERIAL, &settings) != 0) return;
    settings.flags |= ASYNC_LOW_LATENCY;
    ioctl(fd, TIOCSSERIAL, &settings);
}

}  // namespace

Outcome<void> configure_real_port(const std::string& port, const std::string& device, int fd, long baud) {
    sp_port* raw = nullptr;
    const auto not_a_port = [&port] {
        return Error{ErrorKind::bench, port, "this terminal is not a serial port: " + last_text(),
                     "halflsb ports lists the serial ports"};
    };
    if (sp_get_port_by_name(device.c_str(), &raw) != SP_OK) return not_a_port();
    const std::unique_ptr<sp_port, FreePort> freed(raw);
    if (sp_open(raw, SP_MODE_READ_WRITE) != SP_OK) return not_a_port();
    const std::unique_ptr<sp_port, ClosePort> closed(raw);
    if (sp_set_bits(raw, 8) != SP_OK || sp_set_parity(raw, SP_PARITY_NONE) != SP_OK || sp_set_stopbits(raw, 1) != SP_OK)
        return refused(port, "8 data bits, no parity, 1 stop bit");
    if (sp_set_flowcontrol(raw, SP_FLOWCONTROL_NONE) != SP_OK) return refused(port, "to run without flow control");
    const std::string rate = std::to_string(baud);
    const std::string remedy = "choose a rate that both the adapter and the firmware can set";
    if (sp_set_baudrate(raw, static_cast<int>(baud)) != SP_OK)
        return Error{ErrorKind::bench, port, "baud " + rate + " is not supported: " + last_text(), remedy};
    // A driver that cannot set a rate sets another without complaint. Start and stop bits leave room for
    // 5 % between both ends (10 bits, half a bit), so more than half of that is one end's fault.
    const long set = baud_now(raw);
    if (set != 0 && std::labs(set - baud) * 40 > baud)
        return Error{ErrorKind::bench, port, "baud " + rate + " is not supported: the port sets " + std::to_string(set),
                     remedy};

    // libserialport leaves VMIN at 0, which makes an idle line look like the end of a file.
    termios settings{};
    if (tcgetattr(fd, &settings) != 0) return refused(port, "its settings");
    settings.c_cc[VMIN] = 1;
    settings.c_cc[VTIME] = 0;
    if (tcsetattr(fd, TCSANOW, &settings) != 0) return refused(port, "its settings");
    ask_for_low_latency(fd);
    return {};
}

}  // namespace halflsb
