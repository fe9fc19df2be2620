// A pseudo-terminal whose other side the test holds.
#pragma once

#include <fcntl.h>
#include <poll.h>
#include <stdlib.h>
#include <unistd.h>

#include <cerrno>
#include <cstddef>
#include <span>
#include <stdexcept>
#include <string>
#include <vector>

namespace halflsb::test {

class PtyPair {
public:
    PtyPair() : master_(posix_openpt(O_RDWR | O_NOCTTY | O_NONBLOCK | O_CLOEXEC)) {
        if (master_ < 0 || grantpt(master_) != 0 || unlockpt(master_) != 0)
            throw std::runtime_error("no pseudo-terminal");
        path_ = ptsname(master_);
    }
    PtyPair(const PtyPair&) = delete;
    PtyPair& operator=(const PtyPair&) = delete;
    ~PtyPair() { unplug(); }

    /// The side that a program opens.
    const std::string& path() const { return path_; }
    int master() const { return master_; }

    void unplug() {
        if (master_ >= 0) ::close(master_);
        master_ = -1;
    }
    void write(std::span<const std::byte> bytes) {
        while (!bytes.empty()) {
            const ssize_t count = ::write(master_, bytes.data(), bytes.size());
            if (count > 0)
                bytes = bytes.subspan(static_cast<std::size_t>(count));
            else if (errno != EAGAIN && errno != EINTR)
                throw std::runtime_error("the pseudo-terminal takes nothing");
        }
    }
    /// What came within the time, at least one byte unless the time is over.
    std::vector<std::byte> read(int wait_ms) {
        pollfd watched{master_, POLLIN, 0};
        std::vector<std::byte> bytes(4096);
        if (poll(&watched, 1, wait_ms) != 1) return {};
        const ssize_t count = ::read(master_, bytes.data(), bytes.size());
        bytes.resize(count > 0 ? static_cast<std::size_t>(count) : 0);
        return bytes;
    }

private:
    int master_;
    std::string path_;
};

}  // namespace halflsb::test
