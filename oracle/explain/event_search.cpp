#include "oracle/explain/event_search.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <optional>

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
     "the half of the DMA buffer that is read while it is written; the cache in front of it"},
    {PassageKind::output_block_repeated, true, "a block behind the filter is the one before it",
     "the half of the buffer that is sent while it is written"},
    {PassageKind::block_skipped, true, "a block does not reach the filter, the outputs before it come again",
     "what happens when a block is not done before the next one comes"},
    {PassageKind::sample_replaced, false, "the lowest code comes in place of a sample",
     "a value that says \"no data\" and is taken for one"},
    {PassageKind::state_cleared, false, "the state is that of a reset",
     "what is kept from one block to the next: local copies that are not written back"},
    {PassageKind::state_exchanged, false, "the last two words of the state change places",
     "what is written back at the end of a block, and in which order"},
};
/// How far back the samples of a block may lie: halves and rings of buffers, lines of a cache.
constexpr std::array<int, 18> usual_delays = {1,   8,   12,  16,  24,  32,  48,   64,   96,
                                              128, 192, 256, 384, 512, 768, 1024, 2048, 4096};
constexpr std::int64_t no_end = std::int64_t{1} << 40;

class EventSearch {
public:
    EventSearch(const Hypothesis& from, const CaptureSet& captures, const std::function<bool()>& go_on)
        : from_(from), captures_(captures), go_on_(go_on) {}

    /// Where the stimulus moves at each sample the event itself is seen; else where anything is.
    std::vector<Hypothesis> all() {
        const bool stands_alone = from_.board.reset == ResetKind::whole;
        only_ = stands_alone ? captures_.liveliest() : std::nullopt;
        if (only_) follow_all();
        if (!found_.empty()) return std::move(found_);
        only_ = std::nullopt;
        follow_all();
        return std::move(found_);
    }

private:
    CaptureFit fit_of(const Hypothesis& hypothesis) const {
        return only_ ? captures_.until_first_wrong_in(*only_, hypothesis.board)
                     : captures_.until_first_wrong(hypothesis.board);
    }

    void follow_all() {
        const CaptureFit plain = fit_of(from_);
        if (!plain.could_run || plain.wrong_case < 0) return;
        first_wrong_ = plain.wrong_index;
        first_equal_ = plain.equal;
        for (const EventKind& kind : event_kinds) {
            if (!kind.has_length) {
                follow(kind);
                continue;
            }
            for (const int delay : usual_delays) follow_block(kind, delay);
        }
    }

    Hypothesis with(const EventKind& kind, const Passage& passage) const {
        Hypothesis made = from_;
        made.board.passage = passage;
        const std::string when =
            passage.period > 0 ? (passage.period == 1 ? "at each sample from " + std::to_string(passage.first) + " on"
                                                      : "each " + std::to_string(passage.period) + " samples from " +
                                                            std::to_string(passage.first) + " on")
                               : "at sample " + std::to_string(passage.first);
        std::string length, happened = kind.what;
        if (kind.has_length) {
            const std::int64_t ago = passage.samples_ago();
            length = " (" + std::to_string(passage.length) + " samples" +
                     (ago == passage.length ? "" : ", those " + std::to_string(ago) + " before") + ")";
            const std::string next = "the one before it";
            if (const auto at_end = happened.find(next); ago != passage.length && at_end != std::string::npos)
                happened.replace(at_end, next.size(), "an older one");
        }
        // Two numbers of the size of the indices are paid for, and those of a block.
        const double price = 6.0 + std::log2(1.0 + static_cast<double>(passage.first)) +
                             (passage.period > 0 ? std::log2(1.0 + static_cast<double>(passage.period)) : 0.0) +
                             (kind.has_length ? 3.0 : 0.0) + (passage.samples_ago() == passage.length ? 0.0 : 3.0);
        made.changes.push_back({Slot::passage, 0, when + ": " + happened + length, kind.look_at, price});
        return made;
    }

    /// The event may have happened some samples before the capture shows it.
    static constexpr std::int64_t most_before = 4;

    void follow(const EventKind& kind) {
        for (std::int64_t before = 0; before <= most_before; ++before) {
            const std::int64_t at = first_wrong_ - before;
            if (at < 0 || !go_on_()) return;
            const Passage once{kind.kind, 1, at, 0};
            const CaptureFit fit = fit_of(with(kind, once));
            if (!fit.could_run || fit.equal <= first_equal_ + 2) continue;
            if (put(kind, once, fit)) return;
        }
    }

    /// A block that never ends goes wrong behind the end of the one that did.
    void follow_block(const EventKind& kind, int delay) {
        for (std::int64_t before = 0; before <= most_before; ++before) {
            const std::int64_t at = first_wrong_ - before;
            if (at < 0 || !go_on_()) return;
            const CaptureFit endless = fit_of(with(kind, {kind.kind, no_end, at, 0, delay}));
            if (!endless.could_run || endless.wrong_case < 0 || endless.equal <= first_equal_ + 2) continue;
            for (std::int64_t shorter = 0; shorter <= most_before; ++shorter) {
                const std::int64_t length = endless.wrong_index - at - shorter;
                if (length < 1 || !go_on_()) break;
                const Passage once{kind.kind, length, at, 0, length == delay ? 0 : delay};
                const CaptureFit fit = fit_of(with(kind, once));
                if (fit.equal > endless.equal && put(kind, once, fit)) return;
            }
        }
    }

    /// True: it happens but once.
    bool put(const EventKind& kind, const Passage& once, const CaptureFit& fit) {
        if (fit.is_exact()) {
            found_.push_back(with(kind, once));
            return true;
        }
        repeat(kind, once, fit);
        return false;
    }

    /// Where the board with one event goes wrong the next one may be.
    void repeat(const EventKind& kind, const Passage& passage, const CaptureFit& once) {
        const std::int64_t at = passage.first;
        std::vector<std::int64_t> periods;
        const auto suggest = [&](std::int64_t period) {
            if (period > 0 && std::find(periods.begin(), periods.end(), period) == periods.end())
                periods.push_back(period);
        };
        for (std::int64_t before = 0; before <= 4; ++before) suggest(once.wrong_index - at - before);
        // Counted from the start of the case, or of the block.
        for (const std::int64_t period : {at, at + 1, at + passage.length}) suggest(period);
        if (passage.length > 1)
            for (const std::int64_t period : {passage.samples_ago(), 2 * passage.samples_ago()}) suggest(period);
        for (const std::int64_t period : periods) {
            if (!go_on_()) return;
            Passage repeated = passage;
            repeated.period = period;
            Hypothesis regular = with(kind, repeated);
            const CaptureFit fit = fit_of(regular);
            if (fit.equal > once.equal) found_.push_back(std::move(regular));
        }
    }

    const Hypothesis& from_;
    const CaptureSet& captures_;
    const std::function<bool()>& go_on_;
    std::optional<std::size_t> only_;  ///< the case that is looked at; none: all
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
