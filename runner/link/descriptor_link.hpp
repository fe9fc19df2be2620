// A link over one open descriptor that poll can watch: the part that every byte stream of a kernel shares.
#pragma once

#include "runner/link/asio.hpp"
#include "runner/world/file_descriptor.hpp"
#include "runner/link/link.hpp"

namespace halflsb {

class DescriptorLink final : public Link {
public:
    /// Takes `line`, makes it non-blocking. `clock` must outlive the link. Throws std::system_error when the
    /// system has nothing left to watch it with: for the functions that open links, which return Errors.
    DescriptorLink(FileDescriptor line, std::string name, long baud, const Clock& clock);
    ~DescriptorLink() override;

    Outcome<Moved> exchange(std::span<const std::byte> to_write, std::span<std::byte> to_fill,
                            Instant deadline) override;
    std::string name() const override { return name_; }
    long baud() const override { return baud_; }

private:
    Outcome<Moved> move_now(std::span<const std::byte> to_write, std::span<std::byte> to_fill);
    void wait(bool to_write, bool to_read, Duration longest);
    void watch_interrupt();
    Error gone(const std::string& call, const std::string& reason) const;

    // Declared first, destroyed last: descriptors must not outlive it, handlers must not run after them.
    boost::asio::io_context context_{1};
    boost::asio::posix::stream_descriptor line_;
    boost::asio::posix::stream_descriptor interrupt_;
    boost::asio::steady_timer timer_;
    bool interrupt_watched_ = false;
    std::string name_;
    long baud_;
    const Clock& clock_;
};

}  // namespace halflsb
