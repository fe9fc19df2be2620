#include "oracle/explain/channel_search.hpp"

#include <algorithm>
#include <cmath>
#include <string>

#include "oracle/explain/board_model.hpp"

namespace halflsb {
namespace {

constexpr int most_leak_bits = 16;

class ChannelSearch {
public:
    ChannelSearch(const Signal& signal, const std::vector<ChannelBoard>& boards, std::size_t channel)
        : signal_(signal), boards_(boards), channel_(channel) {}

    std::optional<Candidate> run() {
        for (std::size_t other = 0; other < boards_.size(); ++other) {
            if (other == channel_) continue;
            const std::string name = "channel " + std::to_string(other + 1);
            if (auto found = others_samples(other, name)) return found;
            if (auto found = others_output(other, name)) return found;
        }
        if (auto found = shared_filter()) return found;
        for (std::size_t other = 0; other < boards_.size(); ++other) {
            if (other == channel_) continue;
            if (auto found = moved_on(other, "channel " + std::to_string(other + 1))) return found;
        }
        for (std::size_t other = 0; other < boards_.size(); ++other) {
            if (other == channel_) continue;
            if (auto found = leak(other, "channel " + std::to_string(other + 1))) return found;
        }
        return std::nullopt;
    }

private:
    using Codes = std::vector<Code>;

    const std::vector<ChannelCapture>& own() const { return *boards_[channel_].captures; }

    Candidate candidate(std::string what, std::string look_at, double price_bits) const {
        Candidate made;
        made.hypothesis.board = boards_[channel_].declared;
        made.hypothesis.changes.push_back({Slot::channels, 0, std::move(what), std::move(look_at), price_bits});
        made.fit.could_run = true;
        for (const ChannelCapture& capture : own()) made.fit.compared += std::ssize(capture.response);
        made.fit.equal = made.fit.compared;
        return made;
    }

    /// What a board returns to the codes of all cases of a channel; nothing where there is no twin.
    std::vector<Codes> returned(const BoardDescription& board, std::size_t of) const {
        std::vector<Codes> all;
        const auto model = BoardModel::make(board, signal_);
        if (model == nullptr) return all;
        for (const ChannelCapture& capture : *boards_[of].captures) {
            all.emplace_back();
            model->begin_case(capture.start, capture.start_samples);
            model->process(capture.sent, all.back());
        }
        return all;
    }

    /// Behind what a running case leaves out.
    bool is_own_response(const std::vector<Codes>& codes) const {
        if (codes.size() != own().size()) return false;
        for (std::size_t i = 0; i < codes.size(); ++i) {
            const ChannelCapture& capture = own()[i];
            if (codes[i].size() < capture.response.size()) return false;
            const auto first = std::min<std::ptrdiff_t>(
                capture.start == Start::running ? static_cast<std::ptrdiff_t>(capture.start_samples) : 0,
                std::ssize(capture.response));
            if (!std::equal(capture.response.begin() + first, capture.response.end(), codes[i].begin() + first))
                return false;
        }
        return true;
    }

    std::optional<Candidate> others_samples(std::size_t other, const std::string& name) const {
        if (!is_own_response(returned(boards_[channel_].declared, other))) return std::nullopt;
        return candidate("its filter gets the samples of " + name, "the order of the channels in a frame", 4.0);
    }

    std::optional<Candidate> others_output(std::size_t other, const std::string& name) const {
        if (!is_own_response(returned(boards_[other].declared, other))) return std::nullopt;
        return candidate("the output of " + name + " is sent in its place", "the order of the channels in a frame",
                         4.5);
    }

    /// Another channel's samples from some sample of each case on: the first at which any case goes wrong, or a few
    /// before.
    std::optional<Candidate> moved_on(std::size_t other, const std::string& name) const {
        const auto model = BoardModel::make(boards_[channel_].declared, signal_);
        if (model == nullptr) return std::nullopt;
        const std::vector<Codes> plain = returned(boards_[channel_].declared, channel_);
        std::ptrdiff_t first = -1;
        for (std::size_t i = 0; i < plain.size(); ++i) {
            const Codes& response = own()[i].response;
            const auto count = std::min(std::ssize(plain[i]), std::ssize(response));
            const std::ptrdiff_t at =
                std::mismatch(response.begin(), response.begin() + count, plain[i].begin()).first - response.begin();
            if (at < count && (first < 0 || at < first)) first = at;
        }
        constexpr std::ptrdiff_t most_before = 8;
        for (std::ptrdiff_t at = first; at > 0 && at >= first - most_before; --at) {
            std::vector<Codes> all;
            for (std::size_t i = 0; i < own().size(); ++i) {
                Codes sent = own()[i].sent;
                const Codes& others = (*boards_[other].captures)[i].sent;
                const auto from = std::min(at, std::ssize(sent));
                std::copy(others.begin() + from, others.end(), sent.begin() + from);
                model->begin_case(own()[i].start, own()[i].start_samples);
                all.emplace_back();
                model->process(sent, all.back());
            }
            if (is_own_response(all)) {
                return candidate("from sample " + std::to_string(at) + " on its filter gets the samples of " + name,
                                 "where a transfer of all channels begins again after an overrun",
                                 8.0 + std::log2(1.0 + static_cast<double>(at)));
            }
        }
        return std::nullopt;
    }

    /// Sample by sample, in the order of the channels.
    std::optional<Candidate> shared_filter() const {
        const BoardDescription& board = boards_[channel_].declared;
        const auto model = BoardModel::make(board, signal_);
        if (model == nullptr) return std::nullopt;
        const std::size_t width = boards_.size();
        std::vector<Codes> all;
        for (std::size_t i = 0; i < own().size(); ++i) {
            Codes mixed, out;
            for (std::size_t n = 0; n < own()[i].sent.size(); ++n)
                for (const ChannelBoard& each : boards_) mixed.push_back((*each.captures)[i].sent[n]);
            model->begin_case(own()[i].start, own()[i].start_samples * static_cast<std::int64_t>(width));
            model->process(mixed, out);
            all.emplace_back();
            for (std::size_t n = channel_; n < out.size(); n += width) all.back().push_back(out[n]);
        }
        if (!is_own_response(all)) return std::nullopt;
        return candidate("all channels pass one filter and share its state",
                         "which state is handed to the filter of each channel", 4.0);
    }

    std::optional<Candidate> leak(std::size_t other, const std::string& name) const {
        const std::vector<Codes> plain = returned(boards_[channel_].declared, channel_);
        if (plain.empty()) return std::nullopt;
        const std::vector<Codes> outputs = returned(boards_[other].declared, other);
        for (int bits = 0; bits <= most_leak_bits; ++bits) {
            for (const bool is_input : {true, false}) {
                if (!is_input && outputs.empty()) continue;
                const std::string part = bits == 0 ? "all" : "1/" + std::to_string(1 << bits);
                for (const bool wraps : {false, true}) {
                    std::vector<Codes> with = plain;
                    for (std::size_t i = 0; i < with.size(); ++i) {
                        const Codes& codes = is_input ? (*boards_[other].captures)[i].sent : outputs[i];
                        add(codes, bits, is_input ? signal_.input : signal_.output, wraps, with[i]);
                    }
                    if (!is_own_response(with)) continue;
                    return candidate(part + " of the " + (is_input ? "input" : "output") + " of " + name +
                                         " is added to its output" + (wraps ? ", which wraps" : ""),
                                     "what is shared by the channels, and the analogue side",
                                     6.0 + bits + (wraps ? 1.0 : 0.0));
                }
            }
        }
        return std::nullopt;
    }

    void add(const Codes& codes, int bits, const SampleFormat& format, bool wraps, Codes& to) const {
        const std::int64_t zero = zero_code(format), half = std::int64_t{1} << (signal_.output.word_bits - 1);
        const std::int64_t out_zero = zero_code(signal_.output);
        for (std::size_t n = 0; n < std::min(codes.size(), to.size()); ++n) {
            const std::int64_t sum = to[n] - out_zero + ((codes[n] - zero) >> bits);
            const std::int64_t held = wraps ? ((sum + half) & (2 * half - 1)) - half : std::clamp(sum, -half, half - 1);
            to[n] = static_cast<Code>(out_zero + held);
        }
    }

    const Signal& signal_;
    const std::vector<ChannelBoard>& boards_;
    std::size_t channel_;
};

}  // namespace

std::optional<Candidate> channel_cause(const Signal& signal, const std::vector<ChannelBoard>& boards,
                                       std::size_t channel) {
    if (boards.size() < 2 || !signal.input.has_lsb() || !signal.output.has_lsb()) return std::nullopt;
    return ChannelSearch(signal, boards, channel).run();
}

}  // namespace halflsb
