// The host's side of the framed wire (docs/wire.md): greeting, stream with a window of credit, resend
// from the oldest unanswered frame. Every sample passes the board's filter exactly once, or there is an Error.
#pragma once

#include <cstdint>
#include <memory>

#include "runner/link/link.hpp"
#include "runner/wire/wire.hpp"

namespace halflsb {

/// `link` and `clock` must outlive the wire. Nonces follow from `nonce_seed`; tests give one. Two
/// sessions with the same board must not share it, or START could be taken for that of the stream before.
std::unique_ptr<Wire> make_framed_wire(Link& link, const Clock& clock, const WireLimits& limits,
                                       std::uint64_t nonce_seed);
/// The seed from the clock and the process.
std::unique_ptr<Wire> make_framed_wire(Link& link, const Clock& clock, const WireLimits& limits);

}  // namespace halflsb
