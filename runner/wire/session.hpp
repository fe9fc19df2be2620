// The session behind make_framed_wire: one object from the greeting to the end of the last stream.
//
// Everything that moves goes through step(): one exchange on the link, every frame that came handled.
// ask() puts questions outside the stream and waits for their answer; advance() serves the stream.
#pragma once

#include <optional>

#include "runner/link/link.hpp"
#include "runner/wire/arrivals.hpp"
#include "runner/wire/frame.hpp"
#include "runner/wire/messages.hpp"
#include "runner/wire/window.hpp"
#include "runner/wire/wire.hpp"
#include "runner/wire/wire_cost.hpp"

namespace halflsb {

class FramedSession final : public Wire {
public:
    FramedSession(Link& link, const Clock& clock, const WireLimits& limits, std::uint64_t nonce_seed);

    Outcome<Greeting> greet() override;
    Outcome<void> start(std::size_t filter_number, ReturnedCount returned) override;
    std::size_t room_samples() const override;
    void send(std::span<const Code> samples) override;
    void send_reset() override;
    bool is_streaming(std::size_t filter_number) const override;
    Outcome<void> settle() override;
    void send_setting(std::size_t setting_number, std::int32_t value) override;
    Outcome<Received> advance(Instant until) override;
    Outcome<BoardCounters> counters() override;
    WireFigures figures() const override;
    std::int64_t bytes_to_board(std::int64_t samples) const override;
    std::int64_t bytes_to_host(std::int64_t samples) const override;

private:
    /// A question outside the stream, and what counts as its answer.
    struct Question {
        message::Type type, answer;
        std::uint32_t nonce = 0;
        message::Bytes body;
        std::string awaited;  ///< "the greeting", for messages
    };
    struct Patience {
        Duration in_all{};      ///< from the question
        Duration in_silence{};  ///< without any good frame
    };

    // Outside the stream.
    Outcome<void> discard_stale_input();
    Outcome<message::Bytes> ask(const Question& question, Patience patience);
    Outcome<message::Counters> ask_counters();
    /// The most samples that come back for a block of so many.
    std::int64_t most_returned(std::int64_t block_samples) const;
    /// The most samples of a block whose words fit the largest frame (docs/wire.md, section 2.2).
    int most_block_samples() const;
    Outcome<void> await_answers();
    Outcome<void> begin_figures();
    std::uint32_t next_nonce();

    // Everything that moves. step() gives how many bytes were read.
    Outcome<std::size_t> step(Instant deadline);
    void fill_outgoing();
    Outcome<void> handle(const FrameDecoder::Frame& frame);
    Outcome<void> handle_refused(const message::Refused& refused);

    // The stream.
    Outcome<void> take_response(message::BytesView body);
    Outcome<void> take_done(message::BytesView body);
    /// True when the answer is that of the oldest frame; else it is dropped, and a gap makes frames go out again.
    bool is_next_answer(std::uint16_t seq);
    void advance_window();
    void send_again();
    void queue(StreamWindow::Frame& frame, const message::Bytes& body);
    Outcome<void> check_patience();
    Received take_received();
    void forgive_pause(Instant called_at, Instant left_at, std::size_t bytes_read);

    // Time that the line needs.
    Duration line_time(std::size_t bytes) const;
    WireCost cost(std::int64_t samples) const;
    std::size_t frame_bytes_to_board() const;
    std::size_t frame_bytes_to_host() const;
    Duration round_trip(std::size_t frames) const;
    Duration silence_limit() const;
    Duration resend_after() const;
    /// When the board last made progress or said anything at all.
    Instant quiet_since() const;

    Error fail(Error error);
    Error failed_wait(const std::string& awaited, Duration waited);
    Error broken_answer(const std::string& problem);
    std::string oldest_name() const;

    Link& link_;
    const Clock& clock_;
    WireLimits limits_;
    std::uint64_t nonce_state_;

    std::optional<Greeting> greeting_;
    std::optional<Error> error_;  ///< after the first error there is no other answer

    // Bytes on their way.
    message::Bytes control_;   ///< a question that waits for the end of the frame that is going out
    message::Bytes outgoing_;  ///< whole frames
    std::size_t outgoing_done_ = 0;
    message::Bytes incoming_;
    message::Bytes body_;  ///< scratch
    /// Answers of a stream before may still come when the board is greeted: they are whole frames too.
    std::size_t largest_content_ = message::largest_stream_content_bytes;
    FrameDecoder decoder_;
    Arrivals arrivals_;
    const Question* question_ = nullptr;
    std::optional<message::Bytes> answer_;
    Instant last_good_{};  ///< when a good frame came, or the wait for one began
    Instant left_at_{};    ///< when advance() last returned

    // The stream.
    BoardFilter filter_;
    std::size_t filter_number_ = 0;
    int block_samples_ = 0;
    StreamWindow window_;
    std::int64_t sent_samples_ = 0, received_samples_ = 0;  ///< sent, and returned
    ReturnedCount returned_;
    std::int64_t sent_before_reset_ = 0;
    Received ready_;
    std::int64_t answers_ = 0;
    Instant progress_at_{};  ///< when the oldest frame was answered or sent again, or the first one queued
    int resends_in_a_row_ = 0;
    bool recovering_ = false;  ///< sent again, not yet answered: further signs of the same gap say nothing new
    message::Counters counters_at_start_;

    WireFigures figures_;
    std::int64_t frames_bad_at_start_ = 0;
    std::optional<Instant> first_sent_at_;
    Instant last_received_at_{};
};

}  // namespace halflsb
