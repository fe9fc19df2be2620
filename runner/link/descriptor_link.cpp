#include "runner/link/descriptor_link.hpp"

#include <fcntl.h>
#include <termios.h>

#include <algorithm>

#include "runner/world/interrupt.hpp"

namespace halflsb {
namespace asio = boost::asio;
using ErrorCode = boost::system::error_code;

DescriptorLink::DescriptorLink(FileDescriptor line, std::string name, long baud, const Clock& clock)
    : line_(context_), interrupt_(context_), timer_(context_), name_(std::move(name)), baud_(baud), clock_(clock) {
    line_.assign(line.number());
    line.release();
    line_.non_blocking(true);
}

DescriptorLink::~DescriptorLink() {
    // Closing a terminal waits, up to half a minute, until what was written has left: nobody needs it now.
    tcflush(line_.native_handle(), TCIOFLUSH);
}

Error DescriptorLink::gone(const std::string& call, const std::string& reason) const {
    return Error{ErrorKind::bench, name_,
                 "the port is gone: it was unplugged, or the other side closed it (" + call + ": " + reason + ")",
                 "check the cable and the power of the board, then run again"};
}

Outcome<Link::Moved> DescriptorLink::move_now(std::span<const std::byte> to_write, std::span<std::byte> to_fill) {
    Moved moved;
    const auto is_later = [](const ErrorCode& code) {
        return code == asio::error::would_block || code == asio::error::try_again || code == asio::error::interrupted;
    };
    if (!to_fill.empty()) {
        ErrorCode code;
        moved.read = line_.read_some(asio::buffer(to_fill.data(), to_fill.size()), code);
        // With VMIN = 1 a read of 0 bytes is never an idle line: it is an unplug.
        if (code == asio::error::eof) return gone("read", "end of file");
        if (code && !is_later(code)) return gone("read", code.message());
    }
    if (!to_write.empty()) {
        ErrorCode code;
        moved.written = line_.write_some(asio::buffer(to_write.data(), to_write.size()), code);
        // What was read still counts; the next call meets the same error.
        if (code && !is_later(code) && moved.read == 0) return gone("write", code.message());
    }
    return moved;
}

void DescriptorLink::watch_interrupt() {
    const int fd = interrupt_descriptor();
    if (interrupt_watched_ || fd < 0) return;
    ErrorCode code;
    if (!interrupt_.is_open()) interrupt_.assign(fcntl(fd, F_DUPFD_CLOEXEC, 0), code);
    if (code) return;
    interrupt_watched_ = true;
    interrupt_.async_wait(asio::posix::stream_descriptor::wait_read,
                          [this](const ErrorCode&) { interrupt_watched_ = false; });
}

void DescriptorLink::wait(bool to_write, bool to_read, Duration longest) {
    int pending = 0;
    bool over = false;
    const auto done = [&pending, &over](const ErrorCode&) {
        --pending;
        over = true;
    };
    using Kind = asio::posix::stream_descriptor;
    if (to_read) ++pending, line_.async_wait(Kind::wait_read, done);
    if (to_write) ++pending, line_.async_wait(Kind::wait_write, done);
    ++pending, timer_.expires_after(longest), timer_.async_wait(done);
    watch_interrupt();
    context_.restart();
    while (!over && !interrupted()) context_.run_one();
    // No handler may stay queued: it refers to this frame, and it would end the next wait.
    ErrorCode ignored;
    line_.cancel(ignored);
    timer_.cancel();
    while (pending > 0) context_.run_one();
}

Outcome<Link::Moved> DescriptorLink::exchange(std::span<const std::byte> to_write, std::span<std::byte> to_fill,
                                              Instant deadline) {
    for (;;) {
        if (interrupted()) return interrupted_error(name_);
        Outcome<Moved> moved = move_now(to_write, to_fill);
        if (!moved || moved->read > 0 || moved->written > 0) return moved;
        const Duration left = deadline - clock_.now();
        if (left <= Duration::zero()) return Moved{};
        // A deadline of "never" must not overflow inside the timer.
        wait(!to_write.empty(), !to_fill.empty(), std::min<Duration>(left, std::chrono::hours(1)));
    }
}

}  // namespace halflsb
