#include "runner/wire/framed_wire.hpp"

#include <unistd.h>

#include "runner/wire/session.hpp"

namespace halflsb {

std::unique_ptr<Wire> make_framed_wire(Link& link, const Clock& clock, const WireLimits& limits,
                                       std::uint64_t nonce_seed) {
    return std::make_unique<FramedSession>(link, clock, limits, nonce_seed);
}

std::unique_ptr<Wire> make_framed_wire(Link& link, const Clock& clock, const WireLimits& limits) {
    const auto ticks = static_cast<std::uint64_t>(clock.now().time_since_epoch().count());
    return make_framed_wire(link, clock, limits, ticks ^ (static_cast<std::uint64_t>(getpid()) << 44));
}

}  // namespace halflsb
