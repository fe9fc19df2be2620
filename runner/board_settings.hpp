// The settings of the firmware that cases change: which of them to send before a case, and how they get back to
// what the board had when it first greeted.
//
// A setting is only taken for done when the board has acknowledged it. Nothing is assumed of a board that was
// greeted again: it may have been restarted meanwhile.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/wire/wire.hpp"
#include "runner/world/clock.hpp"

namespace halflsb {

class BoardSettings {
public:
    /// A plan that changes none.
    BoardSettings() = default;
    /// For the selected cases of a plan. Errors are of kind bench, place = `port`: a setting that the board does not
    /// have, a value outside its range.
    static Outcome<BoardSettings> agreed(const Greeting& greeting, const Plan& plan,
                                         const std::vector<std::size_t>& selected, const std::string& port);

    struct Change {
        std::size_t number = 0;  ///< of the greeting
        std::int32_t value = 0;
    };
    /// What must be sent before the first sample of the case: first what goes back because the case does not mention
    /// it, then its own in the plan's order.
    std::vector<Change> changes_for(const Case& the_case) const;
    /// What must be sent at the end.
    std::vector<Change> changes_back() const;
    /// Sends them in the open stream and waits until each is acknowledged. Errors as of Wire::advance.
    Outcome<void> make(const std::vector<Change>& changes, Wire& wire, const Clock& clock);
    /// The board was greeted again.
    void forget();
    /// "average-points (16 at the start, now 8)": what changes_back() would send, for a warning.
    std::string text_of_changed() const;

private:
    struct Touched {
        std::size_t number = 0;
        std::string name;
        std::int32_t at_start = 0;
        std::optional<std::int32_t> value;  ///< as the board acknowledged it; none: unknown
        bool was_changed = false;           ///< some case sent another value than at_start
    };
    Touched* find(std::size_t number);
    std::optional<std::size_t> number_of(const std::string& name) const;

    std::vector<Touched> touched_;  ///< those that some selected case changes, in the greeting's order
};

}  // namespace halflsb
