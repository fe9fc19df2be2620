#include "runner/wire/window.hpp"

#include <algorithm>

namespace halflsb {

void StreamWindow::open(int credit_blocks) {
    close();
    frames_.resize(static_cast<std::size_t>(credit_blocks));
}

void StreamWindow::close() {
    frames_.clear();
    oldest_ = unsent_ = next_ = 0;
}

StreamWindow::Frame& StreamWindow::push() {
    Frame& place = frames_[static_cast<std::size_t>(next_) % frames_.size()];
    place.bytes.clear();
    ++next_;
    return place;
}

std::optional<std::span<const std::byte>> StreamWindow::take_unsent() {
    if (!has_unsent()) return std::nullopt;
    return frame(unsent_++).bytes;
}

StreamWindow::Place StreamWindow::place_of(std::uint16_t seq) const {
    const std::size_t ahead = distance(seq);
    if (ahead >= in_flight()) return Place::outside;
    return ahead == 0 ? Place::oldest : Place::later;
}

bool StreamWindow::may_be_expected(std::uint16_t seq) const { return is_open() && distance(seq) <= in_flight(); }

const StreamWindow::Frame* StreamWindow::find(std::uint16_t seq) const {
    return place_of(seq) == Place::outside ? nullptr : &frame(oldest_ + distance(seq));
}

void StreamWindow::answer_oldest() {
    ++oldest_;
    // An answer kept by the board may come before the frame went out again.
    unsent_ = std::max(unsent_, oldest_);
}

}  // namespace halflsb
