// Bytes to and from a board. One interface, so that no caller knows the transport.
#pragma once

#include <cstddef>
#include <memory>
#include <span>
#include <string>

#include "runner/world/clock.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

class Link {
public:
    struct Moved {
        std::size_t written = 0;
        std::size_t read = 0;
    };

    virtual ~Link() = default;

    /// Writes from `to_write` and reads into `to_fill` as far as the line allows, both at once;
    /// returns as soon as at least one byte has moved, or with {0, 0} when `deadline` passes.
    /// Either span may be empty. Errors (kind bench): the line is gone; kind interrupted: the user
    /// asked to stop (world/interrupt). After an error the link is only good for closing.
    virtual Outcome<Moved> exchange(std::span<const std::byte> to_write, std::span<std::byte> to_fill,
                                    Instant deadline) = 0;

    /// What a person calls it: "/dev/ttyUSB0 (usb:0403:6001) at 921600 baud".
    virtual std::string name() const = 0;
    /// Line rate, 0 where it has no meaning.
    virtual long baud() const = 0;
};

}  // namespace halflsb
