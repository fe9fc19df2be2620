#include "tests/mutants/board.hpp"

namespace halflsb::mutants {
namespace {

constexpr Whole block = 64;

Whole mapped(Whole x, int bits, Fault fault) {
    const Whole half = Whole{1} << (bits - 1);
    switch (fault) {
        case Fault::offset_kept:
            return wrapped(x + half, bits);
        case Fault::offset_kept_wide:
            return x + half;
        case Fault::read_unsigned:
            return x < 0 ? x + 2 * half : x;
        case Fault::bytes_swapped:
            return wrapped(((x & 0xFF) << 8) | ((x >> 8) & 0xFF), 16);
        case Fault::negated:
            return wrapped(-x, bits);
        default:
            return x;
    }
}

}  // namespace

Board::Board(std::vector<std::unique_ptr<Core>> cores, int word_bits, Fault fault)
    : cores_(std::move(cores)), word_bits_(word_bits), fault_(fault), got_(cores_.size()) {
    power_up();
}

void Board::power_up() {
    reset();
    for (auto& core : cores_) {
        core->clear();
        core->power_up();
    }
}

void Board::reset() {
    for (auto& core : cores_) core->reset();
    index_ = 0;
    for (auto& each : got_) each.clear();
    sent_.clear();
    held_.assign(cores_.size(), 0);
}

void Board::process(std::span<const Code> in, std::vector<Code>& out) {
    out_ = &out;
    const std::size_t width = cores_.size();
    for (std::size_t at = 0; at < in.size(); at += width) {
        for (std::size_t c = 0; c < width; ++c) got_[c].push_back(in[at + c]);
        instant();
        ++index_;
    }
}

Whole Board::before(std::size_t channel, Whole samples) const {
    return got_[channel][static_cast<std::size_t>(index_ - samples)];
}

Whole Board::received(std::size_t channel) const {
    const std::size_t next = (channel + 1) % cores_.size();
    if (fault_ == Fault::slipped || (fault_ == Fault::rotated && index_ >= 20 * block)) return before(next, 0);
    if (fault_ == Fault::half_repeated && index_ / block == 9) return before(channel, block);
    if (fault_ == Fault::torn_block && index_ >= block && index_ % block >= block - 20) return before(channel, block);
    if (fault_ == Fault::stale_line && index_ % 1024 >= 512 && index_ % 1024 < 528) return before(channel, 2 * block);
    if (fault_ == Fault::no_data && index_ % 500 == 499) return -(Whole{1} << (word_bits_ - 1));
    return mapped(before(channel, 0), word_bits_, fault_);
}

void Board::compute(std::vector<Whole>& results) {
    for (std::size_t c = 0; c < cores_.size(); ++c) {
        const Whole x = received(c);
        cores_[fault_ == Fault::one_filter ? 0 : c]->step(x, results);
    }
}

void Board::send(const std::vector<Whole>& results) {
    for (std::size_t c = 0; c < results.size(); ++c) {
        Whole y = results[c];
        if (fault_ == Fault::bypass) y = before(c, 0);
        if (fault_ == Fault::coupled) y = wrapped(y + (before((c + 1) % cores_.size(), 0) >> 7), word_bits_);
        sent_.push_back(y);
        if (fault_ == Fault::one_late) std::swap(y, held_[c]);
        out_->push_back(static_cast<Code>(y));
    }
}

void Board::instant() {
    const std::ptrdiff_t width = std::ssize(cores_);
    if (fault_ == Fault::cleared_on_update && index_ == 300)
        for (auto& core : cores_) core->clear();
    if (fault_ == Fault::state_exchanged && index_ > 0 && index_ % block == 0)
        for (auto& core : cores_) core->exchange_state();
    const bool is_thousandth = index_ % 1000 == 999;
    if (fault_ == Fault::sample_lost && is_thousandth) return;
    std::vector<Whole> results;
    if (fault_ == Fault::block_skipped && index_ / block == 12) {
        // The output of the block before, once more.
        results.assign(sent_.end() - block * width, sent_.end() - (block - 1) * width);
        return send(results);
    }
    if (fault_ == Fault::each_second) {
        if ((index_ & 1) != 0) {
            held_.clear();
            compute(held_);
        }
        return send(held_);
    }
    if (fault_ == Fault::called_twice) {
        compute(results);
        results.clear();
    }
    compute(results);
    if (fault_ == Fault::output_lost && is_thousandth) return;
    if (fault_ == Fault::slot_again && index_ / block == 20)
        results.assign(sent_.end() - 4 * block * width, sent_.end() - (4 * block - 1) * width);
    send(results);
    if (fault_ == Fault::output_doubled && is_thousandth) send(results);
    if (fault_ == Fault::sample_doubled && is_thousandth) {
        results.clear();
        compute(results);
        send(results);
    }
}

}  // namespace halflsb::mutants
