// The stream of a FramedSession: blocks out, answers in, and what happens when the line loses some.
#include <algorithm>
#include <cassert>

#include "runner/wire/session.hpp"
#include "runner/wire/wire_cost.hpp"

namespace halflsb {
namespace {

/// With as many resends in a row the line carries frames, but no block gets through.
constexpr int most_resends_in_a_row = 10;
/// A caller that was away longer than this did not listen, so the board was not silent.
constexpr Duration longest_glance = std::chrono::milliseconds(50);

std::size_t size_of(std::int64_t count) { return static_cast<std::size_t>(count); }

}  // namespace

std::size_t FramedSession::room_samples() const { return !error_ && window_.has_room() ? size_of(block_samples_) : 0; }

void FramedSession::queue(StreamWindow::Frame& frame, const message::Bytes& body) {
    append_frame(frame.bytes, static_cast<std::uint8_t>(frame.type), body);
    frame.queued_at = clock_.now();
    if (window_.in_flight() > 1) return;
    // The first one in flight: from now on an answer is due.
    last_good_ = progress_at_ = left_at_ = frame.queued_at;
    arrivals_.start_over();
}

void FramedSession::send(std::span<const Code> samples) {
    const std::size_t channels = size_of(filter_.channels_in);
    const std::size_t count = channels == 0 ? 0 : samples.size() / channels;
    if (samples.empty()) return;
    if (count == 0 || samples.size() % channels != 0 || count > room_samples()) {
        fail(Error{ErrorKind::defect, link_.name(),
                   "a block of " + std::to_string(samples.size()) + " codes was sent where " +
                       std::to_string(room_samples()) + " samples of " + std::to_string(channels) + " fit",
                   ""});
        return;
    }
    body_.clear();
    const std::uint16_t seq = window_.next_seq();
    message::encode(message::Samples{seq, {}}, body_);
    const std::size_t fixed = body_.size();
    body_.resize(fixed + samples.size() * filter_.input.word_bytes());
    to_wire_bytes(filter_.input, samples, std::span(body_).subspan(fixed));

    StreamWindow::Frame& frame = window_.push();
    frame.type = message::Type::samples;
    frame.at = sent_samples_;
    frame.samples = static_cast<std::int64_t>(count);
    const auto returned = [this](std::int64_t sent) { return returned_ ? returned_(sent) : sent; };
    const std::int64_t since_reset = sent_samples_ - sent_before_reset_;
    frame.returned = returned(since_reset + frame.samples) - returned(since_reset);
    sent_samples_ += frame.samples;
    if (!first_sent_at_) first_sent_at_ = clock_.now();
    queue(frame, body_);
}

bool FramedSession::is_streaming(std::size_t filter_number) const {
    return !error_ && window_.is_open() && filter_number_ == filter_number;
}

void FramedSession::send_setting(std::size_t setting_number, std::int32_t value) {
    if (room_samples() == 0 || !greeting_ || setting_number >= greeting_->settings.size()) {
        fail(Error{ErrorKind::defect, link_.name(), "a setting was sent without credit, or is none of the board", ""});
        return;
    }
    body_.clear();
    message::encode(message::Set{window_.next_seq(), static_cast<std::uint64_t>(sent_samples_),
                                 static_cast<std::uint8_t>(setting_number), value},
                    body_);
    StreamWindow::Frame& frame = window_.push();
    frame.type = message::Type::set;
    frame.at = sent_samples_;
    frame.samples = 0;
    queue(frame, body_);
}

void FramedSession::send_reset() {
    if (room_samples() == 0) {
        fail(Error{ErrorKind::defect, link_.name(), "a reset was sent without credit", ""});
        return;
    }
    body_.clear();
    message::encode(message::Reset{window_.next_seq(), static_cast<std::uint64_t>(sent_samples_)}, body_);
    StreamWindow::Frame& frame = window_.push();
    frame.type = message::Type::reset;
    frame.at = sent_samples_;
    sent_before_reset_ = sent_samples_;
    frame.samples = 0;
    queue(frame, body_);
}

// ---------------------------------------------------------------------------------------------------------
// Answers

void FramedSession::send_again() {
    if (recovering_ || window_.in_flight() == 0) return;
    window_.rewind();
    recovering_ = true;
    ++resends_in_a_row_;
    ++figures_.resends;
    progress_at_ = clock_.now();
}

bool FramedSession::is_next_answer(std::uint16_t seq) {
    switch (window_.place_of(seq)) {
        case StreamWindow::Place::oldest:
            return true;
        case StreamWindow::Place::later:
            send_again();
            return false;
        case StreamWindow::Place::outside:
            return false;
    }
    return false;
}

void FramedSession::advance_window() {
    window_.answer_oldest();
    ++answers_;
    recovering_ = false;
    resends_in_a_row_ = 0;
    progress_at_ = last_received_at_ = clock_.now();
    arrivals_.start_over();
}

std::string FramedSession::oldest_name() const {
    const StreamWindow::Frame& frame = window_.oldest();
    if (frame.type != message::Type::samples)
        return message::name_of(static_cast<std::uint8_t>(frame.type)) + " before sample " + with_thousands(frame.at);
    return "block " + with_thousands(window_.oldest_number()) + " (samples " + with_thousands(frame.at) + " to " +
           with_thousands(frame.at + frame.samples - 1) + ")";
}

Outcome<void> FramedSession::take_response(message::BytesView body) {
    const auto response = message::decode<message::Response>(body);
    if (!response)
        return broken_answer("a RESPONSE of " + std::to_string(body.size()) + " bytes came, which is too short");
    if (!is_next_answer(response->seq)) return {};
    const StreamWindow::Frame& frame = window_.oldest();
    if (frame.type != message::Type::samples)
        return broken_answer("the board answered " + oldest_name() + " with RESPONSE instead of DONE");
    const std::size_t instant_bytes = size_of(filter_.channels_out) * filter_.output.word_bytes();
    const std::size_t came_bytes = response->words.size(), right_bytes = size_of(frame.returned) * instant_bytes;
    if (frame.returned != frame.samples && came_bytes % instant_bytes == 0 && came_bytes != right_bytes) {
        const std::size_t came = came_bytes / instant_bytes;
        return fail(Error{ErrorKind::bench, link_.name(),
                          "the board answered " + oldest_name() + " with " + std::to_string(came) +
                              (came == 1 ? " sample" : " samples") + "; the plan's filter returns " +
                              std::to_string(frame.returned) + " for them",
                          "say in the plan which input of each group a decimator returns with (phase_samples), or "
                          "correct the firmware: it answers each block with what came of it, docs/wire.md 3"});
    }
    if (came_bytes != right_bytes)
        return broken_answer("the board answered " + oldest_name() + " with " + std::to_string(came_bytes) +
                             " bytes of samples; " + std::to_string(right_bytes) + " are right");
    const std::size_t before = ready_.samples.size();
    ready_.samples.resize(before + size_of(frame.returned) * size_of(filter_.channels_out));
    from_wire_bytes(filter_.output, response->words, std::span(ready_.samples).subspan(before));
    ready_.ticks_total += response->ticks_total;
    ready_.ticks_largest = std::max(ready_.ticks_largest, response->ticks_largest);
    ready_.blocks.push_back(
        {frame.samples, response->ticks_total, response->ticks_largest, clock_.now() - frame.queued_at});
    ready_.answered += frame.samples;
    received_samples_ += frame.returned;
    advance_window();
    return {};
}

Outcome<void> FramedSession::take_done(message::BytesView body) {
    const auto done = message::decode<message::Done>(body);
    if (!done) return broken_answer("DONE came with " + std::to_string(body.size()) + " bytes instead of 10");
    if (!is_next_answer(done->seq)) return {};
    const StreamWindow::Frame& frame = window_.oldest();
    if (frame.type == message::Type::samples)
        return broken_answer("the board answered " + oldest_name() + " with DONE instead of RESPONSE");
    if (done->at != static_cast<std::uint64_t>(frame.at))
        return broken_answer("asked for " + oldest_name() + ", the board did it before sample " +
                             std::to_string(done->at));
    advance_window();
    return {};
}

Received FramedSession::take_received() {
    Received taken = std::move(ready_);
    ready_ = Received{};
    const std::int64_t channels = std::max(filter_.channels_out, 1);
    taken.first_index = received_samples_ - static_cast<std::int64_t>(taken.samples.size()) / channels;
    return taken;
}

// ---------------------------------------------------------------------------------------------------------
// Waiting

Outcome<void> FramedSession::check_patience() {
    if (window_.in_flight() == 0) return {};
    const Instant now = clock_.now();
    if (now - last_good_ >= silence_limit()) return failed_wait("the answer to " + oldest_name(), now - last_good_);
    // A board that lags still answers what it was sent twice: sending more would only fill its buffer with
    // what it has done already. So it is the quiet that counts, and each resend doubles it.
    const bool hopeless = now - progress_at_ >= most_resends_in_a_row * silence_limit();
    if (!hopeless && now - quiet_since() < resend_after()) return {};
    if (hopeless || resends_in_a_row_ >= most_resends_in_a_row)
        return fail(Error{ErrorKind::bench, link_.name(),
                          "sent " + oldest_name() + " " + std::to_string(resends_in_a_row_ + 1) +
                              " times without an answer to it; after the last time " + arrivals_.text(),
                          arrivals_.remedy(link_.baud())});
    // What follows was asked for by time, not by a sign, so a gap seen before does not hold it back.
    recovering_ = false;
    send_again();
    arrivals_.start_over();
    return {};
}

void FramedSession::forgive_pause(Instant called_at, Instant left_at, std::size_t bytes_read) {
    const Duration away = called_at - left_at;
    if (away < longest_glance || bytes_read == 0) return;
    last_good_ = std::max(last_good_, called_at);
    progress_at_ = std::max(progress_at_, called_at);
}

Outcome<Received> FramedSession::advance(Instant until) {
    if (ready_.answered > 0) return take_received();
    if (error_) return *error_;
    if (!window_.is_open())
        return fail(Error{ErrorKind::defect, link_.name(), "a stream was advanced that is not open", ""});
    const Instant called_at = clock_.now();
    const std::int64_t answers_before = answers_;
    for (bool is_first = true;; is_first = false) {
        const bool awaits = window_.in_flight() > 0;
        const Instant give_up =
            awaits ? std::min(last_good_ + silence_limit(), quiet_since() + resend_after()) : called_at;
        const Outcome<std::size_t> moved = step(std::min(until, give_up));
        // Samples that came before an error are good; the error is told by the next call.
        const bool brought = answers_ != answers_before;
        if (!moved && !brought) return moved.error();
        if (moved && is_first) forgive_pause(called_at, left_at_, *moved);
        left_at_ = clock_.now();
        if (brought || !awaits) return take_received();
        if (const Outcome<void> patient = check_patience(); !patient) return patient.error();
        if (left_at_ >= until) return take_received();
    }
}

// ---------------------------------------------------------------------------------------------------------
// Figures

WireFigures FramedSession::figures() const {
    WireFigures figures = figures_;
    figures.frames_bad = decoder_.frames_bad() - frames_bad_at_start_;
    if (first_sent_at_ && answers_ > 0) figures.streaming = last_received_at_ - *first_sent_at_;
    return figures;
}

WireCost FramedSession::cost(std::int64_t samples) const {
    return wire_cost(samples, block_samples_, instant_of(filter_));
}

std::int64_t FramedSession::bytes_to_board(std::int64_t samples) const { return cost(samples).bytes_to_board; }

std::int64_t FramedSession::bytes_to_host(std::int64_t samples) const { return cost(samples).bytes_to_host; }

}  // namespace halflsb
