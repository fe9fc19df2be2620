#include "runner/board.hpp"

#include <spdlog/spdlog.h>

#include <algorithm>

#include "runner/link/serial.hpp"
#include "runner/wire/framed_wire.hpp"
#include "runner/wire/wire_cost.hpp"
#include "runner/world/command.hpp"

namespace halflsb {
namespace {

/// A board that is only asked whether flashing can be skipped need not answer: it may be blank.
constexpr double probe_s = 1.0;
/// Of tidying up: a greeting, then START, its counters, a setting and the counters once more.
constexpr double brief_greeting_s = 0.4, brief_answer_s = 0.15, brief_resend_s = 0.05;
/// Somebody waits for the program to end, and may be about to kill it.
constexpr double longest_drain_s = 4.0;
/// Of the greeting, what each filter and each setting takes on the line.
constexpr std::int64_t page_bytes = 100;
/// By docs/wire.md.
constexpr std::int64_t most_blocks_in_flight = 64;

/// What is in flight when a stream is left must pass the line before the board sees a question, and its greeting after
/// that.
double drain_seconds(const Board& board, const Rig& rig) {
    const Greeting& greeting = board.greeting;
    const BoardFilter& filter = greeting.filters[board.filter_number];
    const std::int64_t block = std::min(greeting.max_block_samples, rig.block_samples);
    // Credit may be more blocks where they are smaller than they could be.
    const std::int64_t in_flight = std::min<std::int64_t>(
        std::int64_t{greeting.credit_blocks} * greeting.max_block_samples, most_blocks_in_flight * block);
    WireCost cost = wire_cost(in_flight, block, instant_of(filter));
    cost.bytes_to_host += page_bytes * static_cast<std::int64_t>(greeting.filters.size() + greeting.settings.size());
    // The rig's rate: a pseudo-terminal has none of its own, and may be paced.
    return std::min(wire_seconds(cost, rig.baud), longest_drain_s);
}

std::string filter_names(const Greeting& greeting) {
    std::string names;
    for (const BoardFilter& filter : greeting.filters) names += (names.empty() ? "\"" : ", \"") + filter.name + "\"";
    return names.empty() ? "none" : names;
}

/// The same settings, whatever their values are now.
bool same_settings(const Greeting& a, const Greeting& b) {
    return std::equal(a.settings.begin(), a.settings.end(), b.settings.begin(), b.settings.end(),
                      [](const BoardSetting& x, const BoardSetting& y) { return x.name == y.name; });
}

/// "1 sample out for 8 in"
std::string rate_text(std::int64_t up, std::int64_t down) {
    return std::to_string(up) + (up == 1 ? " sample" : " samples") + " out for " + std::to_string(down) + " in";
}

std::string channels_text(int in, int out) { return std::to_string(in) + " in, " + std::to_string(out) + " out"; }

WireLimits limits_of(const Rig& rig, double greet_s) {
    WireLimits limits;
    limits.greet = seconds(greet_s);
    limits.answer = seconds(rig.answer_s);
    limits.block_samples = rig.block_samples;
    return limits;
}

Outcome<Board> greet(const Rig& rig, const Clock& clock, double greet_s) {
    auto link = open_serial({rig.port, rig.baud}, clock);
    if (!link) return link.error();
    Board board;
    board.link = std::move(*link);
    board.wire = make_framed_wire(*board.link, clock, limits_of(rig, greet_s));
    auto greeting = board.wire->greet();
    if (!greeting) return greeting.error();
    board.greeting = std::move(*greeting);
    return board;
}

/// True when the board already runs the image, so that flashing it again would change nothing.
Outcome<bool> runs_already(const Rig& rig, const Image& image, const Clock& clock) {
    auto board = greet(rig, clock, std::min(probe_s, rig.greet_s));
    if (board) return board->greeting.build_id == image.build_id;
    if (board.error().kind == ErrorKind::interrupted) return board.error();
    spdlog::info("before flashing: {}", to_text(board.error()));
    return false;
}

}  // namespace

Outcome<std::size_t> agreeing_filter(const Greeting& greeting, const Signal& signal, const std::string& port,
                                     const RateCycle& rate) {
    const auto refuse = [&](std::string problem, std::string remedy) {
        return Error{ErrorKind::bench, port, std::move(problem), std::move(remedy)};
    };
    std::size_t number = greeting.filters.size();
    if (signal.filter.empty()) {
        if (greeting.filters.size() != 1) {
            return refuse(
                "the board has " + std::to_string(greeting.filters.size()) + " filters: " + filter_names(greeting),
                "name the one the plan is about: filter = \"...\" in [signal]");
        }
        number = 0;
    } else {
        for (std::size_t i = 0; i < greeting.filters.size(); ++i) {
            if (greeting.filters[i].name == signal.filter) number = i;
        }
        if (number == greeting.filters.size()) {
            return refuse("the board has no filter \"" + signal.filter + "\"; it has " + filter_names(greeting),
                          "correct filter in [signal] of the plan, or flash the firmware that has it");
        }
    }
    const BoardFilter& filter = greeting.filters[number];
    const auto differs = [&](const std::string& what, const std::string& board, const std::string& plan) {
        return refuse(
            "filter \"" + filter.name + "\" has " + what + " " + board + ", the plan says " + plan,
            "the plan's [signal] states facts of the firmware: correct it, or flash the firmware it is about");
    };
    if (!(filter.input == signal.input)) return differs("input", text_of(filter.input), text_of(signal.input));
    if (!(filter.output == signal.output)) return differs("output", text_of(filter.output), text_of(signal.output));
    if (filter.channels_in != signal.channels || filter.channels_out != signal.channels)
        return differs("channels", channels_text(filter.channels_in, filter.channels_out),
                       channels_text(signal.channels, signal.channels));
    if (rate != RateCycle{filter.down, filter.up}) {
        return refuse("filter \"" + filter.name + "\" returns " + rate_text(filter.up, filter.down) +
                          ", that of the plan " + rate_text(rate.outputs, rate.inputs),
                      "correct the factors in [[filter]] of the plan, or flash the firmware it is about");
    }
    return number;
}

Outcome<Board> open_board(const Rig& rig, const Plan& plan, const std::optional<Image>& image, const Clock& clock,
                          FirmwareCheck& firmware) {
    if (image) {
        firmware.image_file = image->file;
        firmware.image_build_id = image->build_id;
    }
    if (!rig.before_run.empty()) {
        bool skip = false;
        if (image) {
            auto already = runs_already(rig, *image, clock);
            if (!already) return already.error();
            skip = *already;
        }
        firmware.before_run_skipped = skip;
        if (!skip) {
            for (const auto& command : rig.before_run) {
                auto ran = run_command(with_image(command, image ? image->file : ""), rig.folder,
                                       seconds(rig.before_run_limit_s), clock);
                if (!ran) return ran.error();
            }
        }
    }
    auto board = greet(rig, clock, rig.greet_s);
    if (!board) return board.error();
    if (image) {
        const std::string& build_id = board->greeting.build_id;
        if (build_id != image->build_id) {
            return Error{ErrorKind::bench, board->link->name(),
                         "the board runs " +
                             (build_id.empty() ? "a firmware without a build-id" : "build-id " + build_id) + ", " +
                             image->file + " is " + image->build_id,
                         "flash it: the old firmware must not be signed for the new one"};
        }
        firmware.state = FirmwareCheck::State::agrees;
    }
    auto number = agreeing_filter(board->greeting, plan.signal, board->link->name(), rate_cycle_of(plan));
    if (!number) return number.error();
    board->filter_number = *number;
    return board;
}

namespace {

Outcome<void> greet_over_the_same_link(Board& board, const WireLimits& limits, const Clock& clock) {
    board.wire = make_framed_wire(*board.link, clock, limits);
    auto greeting = board.wire->greet();
    if (!greeting) return greeting.error();
    const std::string& name = board.greeting.filters[board.filter_number].name;
    if (greeting->build_id != board.greeting.build_id || greeting->serial != board.greeting.serial ||
        board.filter_number >= greeting->filters.size() || greeting->filters[board.filter_number].name != name ||
        !same_settings(*greeting, board.greeting)) {
        return Error{ErrorKind::bench, board.link->name(), "another board or firmware answers than at the start",
                     "what was reconnected or flashed meanwhile?"};
    }
    board.greeting = std::move(*greeting);
    return {};
}

}  // namespace

Outcome<void> greet_again(Board& board, const Rig& rig, const Clock& clock) {
    return greet_over_the_same_link(board, limits_of(rig, rig.greet_s), clock);
}

Outcome<void> greet_briefly(Board& board, const Rig& rig, const Clock& clock) {
    WireLimits limits = limits_of(rig, brief_greeting_s + drain_seconds(board, rig));
    limits.answer = seconds(brief_answer_s);
    limits.resend = seconds(brief_resend_s);
    return greet_over_the_same_link(board, limits, clock);
}

BoardFacts facts_of(const Board& board, const Rig& rig) {
    const BoardFilter& filter = board.greeting.filters[board.filter_number];
    BoardFacts facts;
    facts.rig_name = rig.name;
    facts.link = board.link->name();
    facts.serial = board.greeting.serial;
    facts.build_id = board.greeting.build_id;
    facts.filter = filter.name;
    facts.injection = name_of(filter.injection);
    facts.block_samples = std::min(board.greeting.max_block_samples, rig.block_samples);
    facts.credit_blocks = board.greeting.credit_blocks;
    facts.channels = filter.channels_out;
    facts.tick_hz = board.greeting.tick_hz;
    facts.tick_bits = board.greeting.tick_bits;
    return facts;
}

}  // namespace halflsb
