#include "runner/wire/session.hpp"

#include <algorithm>

namespace halflsb {
namespace {

constexpr std::size_t incoming_bytes = 16384;
/// Enough for the kernel to chew on while answers are read; a resend waits until they are out.
constexpr std::size_t outgoing_enough_bytes = 4096;
/// Bytes of SAMPLES and RESPONSE beside their words.

std::size_t size_of(int count) { return static_cast<std::size_t>(count); }

}  // namespace

FramedSession::FramedSession(Link& link, const Clock& clock, const WireLimits& limits, std::uint64_t nonce_seed)
    : link_(link),
      clock_(clock),
      limits_(limits),
      nonce_state_(nonce_seed),
      incoming_(incoming_bytes),
      decoder_(largest_content_) {}

// ---------------------------------------------------------------------------------------------------------
// Errors

Error FramedSession::fail(Error error) {
    if (!error_) error_ = std::move(error);
    return *error_;
}

Error FramedSession::failed_wait(const std::string& awaited, Duration waited) {
    return fail(Error{ErrorKind::bench, link_.name(),
                      "awaited " + awaited + " for " + in_seconds(waited) + "; " + arrivals_.text(),
                      arrivals_.remedy(link_.baud())});
}

Error FramedSession::broken_answer(const std::string& problem) {
    return fail(Error{ErrorKind::bench, link_.name(), problem,
                      "the frame arrived whole, so the firmware sent it so: see docs/wire.md 3"});
}

// ---------------------------------------------------------------------------------------------------------
// Time that the line needs: 10 bits a byte

Duration FramedSession::line_time(std::size_t bytes) const {
    if (link_.baud() <= 0) return Duration::zero();
    return seconds(10.0 * static_cast<double>(bytes) / static_cast<double>(link_.baud()));
}

std::size_t FramedSession::frame_bytes_to_board() const {
    return largest_frame_bytes(message::samples_fixed_bytes +
                               size_of(block_samples_ * filter_.channels_in) * filter_.input.word_bytes());
}

std::size_t FramedSession::frame_bytes_to_host() const {
    return largest_frame_bytes(message::response_fixed_bytes + static_cast<std::size_t>(most_returned(block_samples_)) *
                                                                   size_of(filter_.channels_out) *
                                                                   filter_.output.word_bytes());
}

Duration FramedSession::round_trip(std::size_t frames) const {
    // Both directions at once; the first frame alone on its way there, the last alone on its way back.
    const std::size_t there = frame_bytes_to_board(), back = frame_bytes_to_host();
    return line_time(frames * std::max(there, back) + std::min(there, back));
}

Duration FramedSession::silence_limit() const { return limits_.answer + 3 * round_trip(1); }

Duration FramedSession::resend_after() const {
    // A healthy board answers frame by frame, so silence is a sign long before a large window has gone round;
    // and two resends must fit into the patience, or one lost frame at the end of a stream would end it.
    const Duration window = limits_.resend + 3 * round_trip(window_.in_flight());
    const Duration soonest = limits_.resend + 3 * round_trip(1);
    const Duration first = std::min(window, std::max(soonest, silence_limit() / 3));
    constexpr int most_doublings = 2;
    return std::min(first * (1 << std::min(resends_in_a_row_, most_doublings)), std::max(first, silence_limit() / 3));
}

Instant FramedSession::quiet_since() const { return std::max(progress_at_, last_good_); }

// ---------------------------------------------------------------------------------------------------------
// Everything that moves

void FramedSession::fill_outgoing() {
    if (outgoing_done_ < outgoing_.size()) return;
    outgoing_.clear();
    outgoing_done_ = 0;
    outgoing_.swap(control_);
    while (outgoing_.size() < outgoing_enough_bytes) {
        const std::optional<std::span<const std::byte>> frame = window_.take_unsent();
        if (!frame) break;
        outgoing_.insert(outgoing_.end(), frame->begin(), frame->end());
    }
}

Outcome<std::size_t> FramedSession::step(Instant deadline) {
    fill_outgoing();
    const Outcome<Link::Moved> moved =
        link_.exchange(std::span(outgoing_).subspan(outgoing_done_), incoming_, deadline);
    if (!moved) return fail(moved.error());
    outgoing_done_ += moved->written;
    figures_.bytes_sent += static_cast<std::int64_t>(moved->written);
    figures_.bytes_received += static_cast<std::int64_t>(moved->read);
    message::BytesView came = std::span(incoming_).first(moved->read);
    arrivals_.add_bytes(came);
    while (const std::optional<FrameDecoder::Frame> frame = decoder_.next(came)) {
        if (const Outcome<void> handled = handle(*frame); !handled) return handled.error();
    }
    return moved->read;
}

Outcome<void> FramedSession::handle(const FrameDecoder::Frame& frame) {
    arrivals_.add_frame(frame.type);
    // Our own words coming back are no sign of life.
    if (message::is_for_the_board(frame.type)) return {};
    last_good_ = clock_.now();
    switch (static_cast<message::Type>(frame.type)) {
        case message::Type::response:
            return take_response(frame.body);
        case message::Type::done:
            return take_done(frame.body);
        case message::Type::expect:
            if (const auto expect = message::decode<message::Expect>(frame.body);
                expect && window_.may_be_expected(expect->seq))
                send_again();
            return {};
        case message::Type::refused:
            if (const auto refused = message::decode<message::Refused>(frame.body)) return handle_refused(*refused);
            return {};
        default:
            break;
    }
    // Every answer outside the stream begins with its nonce.
    const auto asked = message::decode<message::Status>(frame.body.first(std::min<std::size_t>(frame.body.size(), 4)));
    if (question_ != nullptr && asked && static_cast<message::Type>(frame.type) == question_->answer &&
        asked->nonce == question_->nonce)
        answer_ = message::Bytes(frame.body.begin(), frame.body.end());
    return {};
}

Outcome<void> FramedSession::handle_refused(const message::Refused& refused) {
    const std::string type = message::name_of(refused.type);
    const std::string problem = type + " with REFUSED: " + message::reason_text(refused.reason);
    if (question_ != nullptr && refused.type == static_cast<std::uint8_t>(question_->type) &&
        refused.seq == static_cast<std::uint16_t>(question_->nonce & 0xFFFF))
        return broken_answer("the board answered " + problem);
    const StreamWindow::Frame* frame = window_.find(refused.seq);
    // Anything else is late news of a stream that is closed.
    if (frame == nullptr || static_cast<std::uint8_t>(frame->type) != refused.type) return {};
    constexpr std::uint8_t no_stream = 2;
    if (refused.reason == no_stream)
        return fail(Error{
            ErrorKind::bench, link_.name(),
            "the board was restarted during the stream: it knows of no stream at sample " + with_thousands(frame->at),
            "look for a watchdog, a brown-out or a fault handler, and run again"});
    return broken_answer("the board answered " + problem + " (sample " + with_thousands(frame->at) + ")");
}

}  // namespace halflsb
