// A link in memory and fake time, full duplex, to a peer that is a program of the test. Remembers every
// byte unless told not to.
#pragma once

#include <functional>

#include "runner/link/link.hpp"
#include "tests/support/fake_clock.hpp"
#include "tests/support/fake_line.hpp"

namespace halflsb::test {

class Peer {
public:
    virtual ~Peer() = default;
    /// Takes bytes of the host; gives what it answers at once.
    virtual Bytes receive(std::span<const std::byte> bytes) = 0;
};

/// Answers nothing.
class SilentPeer final : public Peer {
public:
    Bytes receive(std::span<const std::byte>) override { return {}; }
};

/// Sends back what it gets.
class EchoPeer final : public Peer {
public:
    Bytes receive(std::span<const std::byte> bytes) override { return Bytes(bytes.begin(), bytes.end()); }
};

/// Says the same whatever it gets.
class TalkingPeer final : public Peer {
public:
    explicit TalkingPeer(std::string text) : text_(std::move(text)) {}
    Bytes receive(std::span<const std::byte>) override {
        const auto bytes = std::as_bytes(std::span(text_.data(), text_.size()));
        return Bytes(bytes.begin(), bytes.end());
    }

private:
    std::string text_;
};

class FakeLink final : public Link {
public:
    FakeLink(FakeClock& clock, Peer& peer) : clock_(clock), peer_(peer) {}

    FakeLine to_board, to_host;
    std::size_t largest_read = SIZE_MAX, largest_write = SIZE_MAX;
    std::optional<int> gone_at_exchange;       ///< this exchange and all later ones fail
    std::function<void(int)> before_exchange;  ///< called with its number, from 1
    bool remembers = true;
    Bytes written, read;  ///< everything, as the host saw it
    std::int64_t bytes_written = 0, bytes_read = 0;
    int exchanges = 0;

    void set_baud(long baud) {
        baud_ = baud;
        to_board.set_baud(baud);
        to_host.set_baud(baud);
    }
    void say(std::span<const std::byte> bytes) { to_host.put(bytes, clock_.now()); }

    Outcome<Moved> exchange(std::span<const std::byte> to_write, std::span<std::byte> to_fill,
                            Instant deadline) override {
        ++exchanges;
        if (before_exchange) before_exchange(exchanges);
        if (gone_at_exchange && exchanges >= *gone_at_exchange)
            return Error{ErrorKind::bench, name(), "the port is gone", "check the cable"};
        Moved moved;
        for (;;) {
            if (moved.written == 0 && !to_write.empty()) {
                moved.written = std::min({to_write.size(), largest_write, to_board.room(clock_.now())});
                to_board.put(to_write.first(moved.written), clock_.now());
                if (remembers)
                    written.insert(written.end(), to_write.begin(),
                                   to_write.begin() + static_cast<std::ptrdiff_t>(moved.written));
            }
            serve_peer();
            moved.read = to_host.take(to_fill.first(std::min(to_fill.size(), largest_read)), clock_.now());
            if (remembers)
                read.insert(read.end(), to_fill.begin(), to_fill.begin() + static_cast<std::ptrdiff_t>(moved.read));
            bytes_written += static_cast<std::int64_t>(moved.written);
            bytes_read += static_cast<std::int64_t>(moved.read);
            if (moved.written > 0 || moved.read > 0 || clock_.now() >= deadline) return moved;
            clock_.advance_to(next_event(deadline, to_write.empty()));
        }
    }

    std::string name() const override { return "fake line"; }
    long baud() const override { return baud_; }

private:
    void serve_peer() {
        while (const std::size_t count = to_board.take(buffer_, clock_.now())) {
            const Bytes answer = peer_.receive(std::span(buffer_).first(count));
            to_host.put(answer, clock_.now());
        }
    }
    Instant next_event(Instant deadline, bool nothing_to_write) const {
        Instant next = deadline;
        for (const FakeLine* line : {&to_board, &to_host})
            if (const auto at = line->next_arrival()) next = std::min(next, *at);
        // A full buffer has room again after a while.
        if (!nothing_to_write) next = std::min(next, clock_.now() + std::chrono::milliseconds(1));
        return std::max(next, clock_.now() + Duration(1));
    }

    FakeClock& clock_;
    Peer& peer_;
    Bytes buffer_ = Bytes(4096);
    long baud_ = 0;
};

}  // namespace halflsb::test
