#include "rigs/virtual-board/pseudo_terminal.hpp"

#include <fcntl.h>
#include <stdlib.h>
#include <sys/inotify.h>
#include <sys/ioctl.h>
#include <sys/stat.h>
#include <termios.h>
#include <unistd.h>

#include <array>
#include <cerrno>
#include <cstdio>
#include <cstring>

namespace halflsb::board {

namespace {

std::string failed(const std::string& what) { return what + ": " + std::strerror(errno); }

}  // namespace

std::string PseudoTerminal::open(const std::string& link) {
    board_side_ = ::posix_openpt(O_RDWR | O_NOCTTY | O_CLOEXEC | O_NONBLOCK);
    if (board_side_ < 0 || ::grantpt(board_side_) != 0 || ::unlockpt(board_side_) != 0) {
        return failed("no pseudo-terminal");
    }
    std::array<char, 128> name{};
    if (::ptsname_r(board_side_, name.data(), name.size()) != 0) return failed("the pseudo-terminal has no name");
    device_ = name.data();
    host_side_ = ::open(device_.c_str(), O_RDWR | O_NOCTTY | O_CLOEXEC);
    termios settings{};
    if (host_side_ < 0 || ::tcgetattr(host_side_, &settings) != 0) return failed(device_);
    ::cfmakeraw(&settings);  // a new one would rewrite line ends and echo
    if (::tcsetattr(host_side_, TCSANOW, &settings) != 0) return failed(device_);
    closings_ = ::inotify_init1(IN_NONBLOCK | IN_CLOEXEC);
    if (closings_ >= 0) ::inotify_add_watch(closings_, device_.c_str(), IN_CLOSE);
    if (link.empty()) return "";

    struct stat there {};
    if (::lstat(link.c_str(), &there) == 0 && !S_ISLNK(there.st_mode)) {
        return link + ": is there already and is no symbolic link; name another --link";
    }
    const std::string fresh = link + ".new";
    ::unlink(fresh.c_str());
    if (::symlink(device_.c_str(), fresh.c_str()) != 0 || ::rename(fresh.c_str(), link.c_str()) != 0) {
        return failed(link);
    }
    link_ = link;
    return "";
}

void PseudoTerminal::forget_claim() const {
    alignas(inotify_event) std::array<char, 4096> events;
    while (::read(closings_, events.data(), events.size()) > 0) {
    }
    ::ioctl(host_side_, TIOCNXCL);
}

PseudoTerminal::~PseudoTerminal() {
    // Another board may have taken the name over meanwhile: only our own link is removed.
    std::array<char, 128> target{};
    if (!link_.empty() && ::readlink(link_.c_str(), target.data(), target.size() - 1) > 0 && device_ == target.data()) {
        ::unlink(link_.c_str());
    }
    if (closings_ >= 0) ::close(closings_);
    if (host_side_ >= 0) ::close(host_side_);
    if (board_side_ >= 0) ::close(board_side_);
}

}  // namespace halflsb::board
