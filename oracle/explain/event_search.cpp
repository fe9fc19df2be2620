#include "oracle/explain/event_search.hpp"

#include <algorithm>
#include <array>
#include <cmath>

namespace halflsb {
namespace {

struct EventKind {
    PassageKind kind;
    bool has_length;
    const char* what;
    const char* look_at;
};

constexpr EventKind event_kinds[] = {
    {PassageKind::lost, false, "a sample does not reach the filter, the output is held",
     "an overrun of the input: the interrupt or the DMA in front of the filter"},
    {PassageKind::lost_shifted, false, "a sample is lost in front of the filter",
     "an overrun of the input: the interrupt or the DMA in front of the filter"},
    {PassageKind::doubled, false, "a sample reaches the filter twice",
     "an underrun of the input: the same sample read again"},
    {PassageKind::doubled_shifted, false, "a sample reaches the filter twice, what follows comes later",
     "an underrun of the input: the same sample read again"},
    {PassageKind::output_lost, false, "an output is lost behind the filter",
     "the buffer between the filter and the line"},
    {PassageKind::output_doubled, false, "an output is sent twice", "the buffer between the filter and the line"},
    {PassageKind::block_repeated, true, "a block in front of the filter is the one before it",
     "the half of the DMA buffer that is read while it is written"},
    {PassageKind::output_block_repeated, true, "a block behind the filter is the one before it",
     "the half of the buffer that is sent while it is written"},
    {PassageKind::sample_replaced, false, "the lowest code comes in place of a sample",
     "a value that says \"no data\" and is taken for one"},
    {PassageKind::state_cleared, false, "the state is that of a reset",
     "what is kept from one block to the next: local copies that are not written back"},
    {PassageKind::state_exchanged, false, "the last two words of the state change places",
     "what is written back at the end of a block, and in which order"},
};
constexpr std::array<int, 11> block_lengths = {8, 16, 32, 64, 128, 256, 512, 1024, 2048, 12, 48};

class EventSearch {
public:
    EventSearch(const Hypothesis& from, const CaptureSet& captures, const std::function<bool()>& go_on)
        : from_(from), captures_(captures), go_on_(go_on) {}

    std::vector<Hypothesis> all() {
        const CaptureFit plain = captures_.until_first_wrong(from_.board);
        if (!plain.could_run || plain.wrong_case < 0) return {};
        first_wrong_ = plain.wrong_index;
        first_equal_ = plain.equal;
        for (const EventKind& kind : event_kinds) {
            if (!kind.has_length) {
                follow(kind, 1);
                continue;
            }
            for (const int length : block_lengths) follow(kind, length);
        }
        return std::move(found_);
    }

private:
    Hypothesis with(const EventKind& kind, const Passage& passage) const {
        Hypothesis made = from_;
        made.board.passage = passage;
        const std::string when =
            passage.period > 0 ? (passage.period == 1 ? "at each sample from " + std::to_string(passage.first) + " on"
                                                      : "each " + std::to_string(passage.period) + " samples from " +
                                                            std::to_string(passage.first) + " on")
                               : "at sample " + std::to_string(passage.first);
        const std::string length = kind.has_length ? " (" + std::to_string(passage.length) + " samples)" : "";
        // Two numbers of the size of the indices are paid for, and one for the length.
        const double price = 6.0 + std::log2(1.0 + static_cast<double>(passage.first)) +
                             (passage.period > 0 ? std::log2(1.0 + static_cast<double>(passage.period)) : 0.0) +
                             (kind.has_length ? 3.0 : 0.0);
        made.changes.push_back({Slot::passage, 0, when + ": " + kind.what + length, kind.look_at, price});
        return made;
    }

    /// The event may have happened some samples before the capture shows it.
    void follow(const EventKind& kind, int length) {
        constexpr std::int64_t most_before = 4;
        for (std::int64_t before = 0; before <= most_before; ++before) {
            const std::int64_t at = first_wrong_ - before;
            if (at < 0 || !go_on_()) return;
            const Hypothesis once = with(kind, {kind.kind, length, at, 0});
            const CaptureFit fit = captures_.until_first_wrong(once.board);
            if (fit.is_exact()) {
                found_.push_back(once);
                return;
            }
            if (!fit.could_run || fit.equal <= first_equal_ + 2) continue;
            repeat(kind, length, at, fit);
        }
    }

    /// Where the board with one event goes wrong the next one may be.
    void repeat(const EventKind& kind, int length, std::int64_t at, const CaptureFit& once) {
        std::vector<std::int64_t> periods;
        const auto suggest = [&](std::int64_t period) {
            if (period > 0 && std::find(periods.begin(), periods.end(), period) == periods.end())
                periods.push_back(period);
        };
        for (std::int64_t before = 0; before <= 4; ++before) suggest(once.wrong_index - at - before);
        // Counted from the start of the case, or of the block.
        for (const std::int64_t period : {at, at + 1, at + length}) suggest(period);
        for (const std::int64_t period : periods) {
            if (!go_on_()) return;
            Hypothesis regular = with(kind, {kind.kind, length, at, period});
            const CaptureFit fit = captures_.until_first_wrong(regular.board);
            if (fit.equal > once.equal) found_.push_back(std::move(regular));
        }
    }

    const Hypothesis& from_;
    const CaptureSet& captures_;
    const std::function<bool()>& go_on_;
    std::int64_t first_wrong_ = 0, first_equal_ = 0;
    std::vector<Hypothesis> found_;
};

}  // namespace

std::vector<Hypothesis> event_hypotheses(const Hypothesis& from, const CaptureSet& captures,
                                         const std::function<bool()>& go_on) {
    if (from.board.passage.kind != PassageKind::plain) return {};
    return EventSearch(from, captures, go_on).all();
}

}  // namespace halflsb
