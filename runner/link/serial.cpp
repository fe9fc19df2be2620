#include "runner/link/serial.hpp"

#include <fcntl.h>
#include <grp.h>
#include <sys/file.h>
#include <sys/ioctl.h>
#include <sys/sysmacros.h>
#include <termios.h>

#include <array>
#include <cerrno>
#include <climits>
#include <cstdlib>
#include <cstring>
#include <exception>

#include "runner/link/descriptor_link.hpp"
#include "runner/link/port_holder.hpp"
#include "runner/link/ports.hpp"
#include "runner/link/real_port.hpp"
#include "runner/world/file_descriptor.hpp"

namespace halflsb {
namespace {

std::string system_text(int error_number) { return std::strerror(error_number); }

Error bench(const std::string& port, std::string problem, std::string remedy) {
    return Error{ErrorKind::bench, port, std::move(problem), std::move(remedy)};
}

/// The device behind links; the path itself when that cannot be told.
std::string behind_links(const std::string& path) {
    std::array<char, PATH_MAX> resolved{};
    return realpath(path.c_str(), resolved.data()) == nullptr ? path : std::string(resolved.data());
}

/// The majors 136 to 143 are the UNIX 98 pseudo-terminals (Linux, Documentation/admin-guide/devices.txt).
bool is_pseudo_terminal(const struct stat& status) {
    const unsigned number = major(status.st_rdev);
    return number >= 136 && number <= 143;
}

std::string name_of_group(gid_t number) {
    std::array<char, 4096> buffer{};
    group entry{};
    group* found = nullptr;
    if (getgrgid_r(number, &entry, buffer.data(), buffer.size(), &found) == 0 && found != nullptr)
        return found->gr_name;
    return std::to_string(number);
}

Error busy(const std::string& port, dev_t device, int own_descriptor) {
    const std::string holder = holder_of(device, own_descriptor);
    return bench(
        port, holder.empty() ? "the port is busy: another process uses it" : "the port is busy: " + holder + " uses it",
        "wait until it has finished, or stop it");
}

Error not_a_terminal(const std::string& port) {
    return bench(port, "this is not a serial port: it is no terminal device",
                 "port in the rig names a device such as /dev/ttyUSB0, or a stable name; halflsb ports lists them");
}

Error missing(const std::string& port, const std::string& path) {
    struct stat link {};
    if (lstat(path.c_str(), &link) == 0 && S_ISLNK(link.st_mode))
        return bench(port, "no such port: the link leads to a device that is gone",
                     "start the emulated board first, or plug the board in");
    const Outcome<std::vector<PortInfo>> ports = list_ports();
    return ports ? no_such_port(port, *ports) : no_such_port(port, {});
}

/// A pseudo-terminal rewrites bytes until it is told not to.
Outcome<void> configure_pseudo_terminal(const std::string& port, int fd, long baud) {
    termios settings{};
    if (tcgetattr(fd, &settings) != 0) return not_a_terminal(port);
    cfmakeraw(&settings);
    settings.c_cflag |= CLOCAL | CREAD;
    settings.c_cc[VMIN] = 1;
    settings.c_cc[VTIME] = 0;
    // A rate without a constant (250000) stays as it was: nothing here has a rate.
    cfsetspeed(&settings, static_cast<speed_t>(baud));
    if (tcsetattr(fd, TCSANOW, &settings) != 0)
        return bench(port, "the terminal refused raw mode: " + system_text(errno), "");
    return {};
}

}  // namespace

Error no_permission(const std::string& port, const struct stat& status) {
    const std::string group = name_of_group(status.st_gid);
    const std::string problem = "no permission to open it; it belongs to the group \"" + group + "\"";
    if (status.st_gid == 0 || (status.st_mode & S_IRGRP) == 0 || (status.st_mode & S_IWGRP) == 0)
        return bench(port, problem + ", which has no right to it either",
                     "ask the administrator for a udev rule that gives it to a group such as dialout");
    return bench(port, problem, "join that group and log in again: sudo usermod -aG " + group + " $USER");
}

Outcome<std::unique_ptr<Link>> open_serial(const SerialPort& port, const Clock& clock) {
    if (port.baud <= 0 || port.baud > INT_MAX)
        return Error{ErrorKind::input, port.port, "baud " + std::to_string(port.baud) + " is no line rate",
                     "write the rate that the firmware sets, such as 115200"};
    const Outcome<std::vector<PortInfo>> ports = list_ports();
    const std::vector<PortInfo> seen = ports ? *ports : std::vector<PortInfo>{};
    const Outcome<std::string> path = find_device(port.port, seen);
    if (!path) return path.error();

    struct stat status {};
    if (stat(path->c_str(), &status) != 0) {
        if (errno == ENOENT || errno == ENOTDIR) return missing(port.port, *path);
        return bench(port.port, "cannot be opened: " + system_text(errno), "");
    }
    if (!S_ISCHR(status.st_mode)) return not_a_terminal(port.port);
    // Non-blocking, or the open waits for a carrier.
    FileDescriptor line(open(path->c_str(), O_RDWR | O_NOCTTY | O_NONBLOCK | O_CLOEXEC));
    if (!line.is_open()) {
        if (errno == EACCES || errno == EPERM) return no_permission(port.port, status);
        if (errno == EBUSY) return busy(port.port, status.st_rdev, -1);
        if (errno == ENOENT || errno == ENXIO || errno == ENODEV || errno == EIO) return missing(port.port, *path);
        return bench(port.port, "cannot be opened: " + system_text(errno), "");
    }
    if (isatty(line.number()) == 0) return not_a_terminal(port.port);
    // The lock comes before any setting: a port in use must not notice us.
    if (flock(line.number(), LOCK_EX | LOCK_NB) != 0) return busy(port.port, status.st_rdev, line.number());

    const std::string device = behind_links(*path);
    const Outcome<void> configured = is_pseudo_terminal(status)
                                         ? configure_pseudo_terminal(port.port, line.number(), port.baud)
                                         : configure_real_port(port.port, device, line.number(), port.baud);
    if (!configured) return configured.error();
    ioctl(line.number(), TIOCEXCL);
    tcflush(line.number(), TCIOFLUSH);

    std::string name = port.port;
    if (device != *path || *path != port.port) name += " (" + device + ")";
    for (const PortInfo& info : seen)
        if (info.device == device && !info.stable_name.empty() && info.stable_name != port.port && device == port.port)
            name += " (" + info.stable_name + ")";
    name += " at " + std::to_string(port.baud) + " baud";
    try {
        return std::unique_ptr<Link>(
            std::make_unique<DescriptorLink>(std::move(line), std::move(name), port.baud, clock));
    } catch (const std::exception& reason) {
        return Error{ErrorKind::defect, port.port, std::string("the port cannot be watched: ") + reason.what(), ""};
    }
}

}  // namespace halflsb
