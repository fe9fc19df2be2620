// A board that is ready for samples: commands of the rig run, port open, greeted, and what it says of
// itself agrees with the plan and with --image.
#pragma once

#include <memory>
#include <optional>
#include <string>

#include "oracle/judge/case_rates.hpp"
#include "runner/config/rig.hpp"
#include "runner/link/link.hpp"
#include "runner/wire/wire.hpp"
#include "runner/world/clock.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

struct Board {
    std::unique_ptr<Link> link;
    std::unique_ptr<Wire> wire;  ///< over *link
    Greeting greeting;
    std::size_t filter_number = 0;  ///< the one the plan is about
};

/// An image whose build-id the board must have.
struct Image {
    std::string file;
    std::string build_id;
};

/// Runs [commands].before_run unless the board already runs `image`, opens the port, greets.
/// Errors: bench (command, port, silence, a filter or format that the board does not have, another
/// build-id than the image), interrupted. `firmware` is filled with what was found out.
Outcome<Board> open_board(const Rig& rig, const Plan& plan, const std::optional<Image>& image, const Clock& clock,
                          FirmwareCheck& firmware);

/// Which of the board's filters the plan is about; `rate` is that of the plan. Errors are of kind bench, place = the
/// port.
Outcome<std::size_t> agreeing_filter(const Greeting& greeting, const Signal& signal, const std::string& port,
                                     const RateCycle& rate = {});

/// After a case went wrong: a new session over the same port, with the same firmware and filter.
Outcome<void> greet_again(Board& board, const Rig& rig, const Clock& clock);
/// The same when there is something left to tidy up: about a second for all that follows and what the line needs for
/// the samples in flight, a few seconds at most, or an Error.
Outcome<void> greet_briefly(Board& board, const Rig& rig, const Clock& clock);

BoardFacts facts_of(const Board& board, const Rig& rig);

}  // namespace halflsb
