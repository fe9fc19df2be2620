// Outside the stream: the greeting, the start of a stream, the counters.
#include <algorithm>

#include "runner/wire/greeting.hpp"
#include "runner/wire/session.hpp"

namespace halflsb {
namespace {

/// Questions and answers outside the stream, as frames.
constexpr std::size_t largest_question_bytes =
    largest_frame_bytes(message::largest_page_content_bytes - content_overhead_bytes);

}  // namespace

std::uint32_t FramedSession::next_nonce() {
    // SplitMix64 (Steele, Lea, Flood 2014): neighbouring seeds give unrelated nonces.
    nonce_state_ += 0x9E3779B97F4A7C15ULL;
    std::uint64_t z = nonce_state_;
    z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9ULL;
    z = (z ^ (z >> 27)) * 0x94D049BB133111EBULL;
    return static_cast<std::uint32_t>((z ^ (z >> 31)) >> 32);
}

Outcome<message::Bytes> FramedSession::ask(const Question& question, Patience patience) {
    struct Asking {
        FramedSession& session;
        ~Asking() { session.question_ = nullptr; }
    } asking{*this};
    question_ = &question;
    answer_.reset();
    control_.clear();
    arrivals_.start_over();
    const Instant begin = clock_.now();
    const Duration repeat_after = limits_.resend + 3 * line_time(2 * largest_question_bytes);
    Instant repeat_at = begin;
    last_good_ = begin;
    for (;;) {
        if (clock_.now() >= repeat_at) {
            // One repetition may wait; a line that takes nothing must not collect them.
            if (control_.empty()) {
                control_.push_back(std::byte{0});
                append_frame(control_, static_cast<std::uint8_t>(question.type), question.body);
            }
            repeat_at = clock_.now() + repeat_after;
        }
        const Instant give_up = std::min(begin + patience.in_all, last_good_ + patience.in_silence);
        const Outcome<std::size_t> moved = step(std::min(give_up, repeat_at));
        if (!moved) return moved.error();
        if (answer_) return *answer_;
        const Instant now = clock_.now();
        if (now >= begin + patience.in_all || now >= last_good_ + patience.in_silence)
            return failed_wait(question.awaited, now - begin);
    }
}

Outcome<void> FramedSession::discard_stale_input() {
    // Bounded: a board that talks all the time must not keep us here.
    for (int k = 0; k < 64; ++k) {
        const Outcome<Link::Moved> moved = link_.exchange({}, incoming_, clock_.now());
        if (!moved) return fail(moved.error());
        if (moved->read == 0) break;
    }
    return {};
}

Outcome<Greeting> FramedSession::greet() {
    if (error_) return *error_;
    window_.close();
    outgoing_.clear();
    outgoing_done_ = 0;
    if (const Outcome<void> discarded = discard_stale_input(); !discarded) return discarded.error();
    // Ends whatever the board's decoder holds, also when one of them is mangled.
    outgoing_.assign(4, std::byte{0});

    const Instant give_up = clock_.now() + limits_.greet;
    GreetingReader reader(link_.name());
    for (int page = 0; !reader.is_complete(); ++page) {
        Question question{message::Type::hello, message::Type::greeting, next_nonce(), {}, ""};
        question.awaited = page == 0 ? "the board's greeting"
                                     : "page " + std::to_string(page) + " of " + std::to_string(reader.pages()) +
                                           " of the board's greeting";
        message::encode(message::Hello{question.nonce, static_cast<std::uint8_t>(page)}, question.body);
        const Duration left = give_up - clock_.now();
        const Outcome<message::Bytes> answer = ask(question, Patience{left, left});
        if (!answer) return answer.error();
        const auto content = message::decode<message::GreetingPage>(*answer);
        if (!content)
            return broken_answer("a GREETING of " + std::to_string(answer->size()) + " bytes came, which is too short");
        if (const Outcome<void> added = reader.add(*content); !added) return fail(added.error());
    }
    greeting_ = reader.greeting();
    return *greeting_;
}

Outcome<message::Counters> FramedSession::ask_counters() {
    Question question{message::Type::status, message::Type::counters, next_nonce(), {}, "the board's counters"};
    message::encode(message::Status{question.nonce}, question.body);
    const Outcome<message::Bytes> answer =
        ask(question, Patience{10 * limits_.answer, limits_.answer + 3 * line_time(2 * largest_question_bytes)});
    if (!answer) return answer.error();
    const auto counters = message::decode<message::Counters>(*answer);
    if (!counters)
        return broken_answer("COUNTERS came with " + std::to_string(answer->size()) + " bytes instead of 24");
    return *counters;
}

Outcome<void> FramedSession::start(std::size_t filter_number, ReturnedCount returned) {
    if (error_) return *error_;
    if (!greeting_ || filter_number >= greeting_->filters.size())
        return Error{ErrorKind::defect, link_.name(),
                     "a stream was started without a greeting or on a filter that is not there", ""};
    window_.close();
    // Frames of the stream before that are not out yet stay here; a 0x00 ends the one that is cut.
    outgoing_.clear();
    outgoing_done_ = 0;
    filter_ = greeting_->filters[filter_number];
    filter_number_ = filter_number;
    returned_ = std::move(returned);
    sent_before_reset_ = 0;
    const int asked = std::clamp(limits_.block_samples, 1, most_block_samples());
    block_samples_ = asked;
    // Never smaller than for the stream before, whose last answers are still signs of life.
    largest_content_ = std::max(largest_content_, frame_bytes_to_host());
    decoder_ = FrameDecoder(largest_content_);

    Question question{message::Type::start, message::Type::started, next_nonce(), {}, "the answer to START"};
    message::encode(
        message::Start{question.nonce, static_cast<std::uint8_t>(filter_number), static_cast<std::uint16_t>(asked), 0},
        question.body);
    // Answers to the stream before may still come first, so silence and not the whole time decides.
    const Outcome<message::Bytes> answer =
        ask(question, Patience{10 * limits_.answer, limits_.answer + 3 * line_time(2 * largest_question_bytes)});
    if (!answer) return answer.error();
    const auto started = message::decode<message::Started>(*answer);
    if (!started) return broken_answer("STARTED came with " + std::to_string(answer->size()) + " bytes instead of 7");
    if (started->block_samples < 1 || started->block_samples > asked)
        return broken_answer("asked for blocks of " + std::to_string(asked) + " samples, the board granted " +
                             std::to_string(started->block_samples));
    if (started->credit_blocks < 1 || started->credit_blocks > 64)
        return broken_answer("the board granted a credit of " + std::to_string(started->credit_blocks) +
                             " blocks; 1 to 64 are possible");
    block_samples_ = started->block_samples;
    if (const Outcome<void> begun = begin_figures(); !begun) return begun;

    window_.open(started->credit_blocks);
    sent_samples_ = received_samples_ = 0;
    ready_ = Received{};
    recovering_ = false;
    resends_in_a_row_ = 0;
    arrivals_.start_over();
    left_at_ = clock_.now();
    return {};
}

int FramedSession::most_block_samples() const {
    const std::size_t input = static_cast<std::size_t>(filter_.channels_in) * filter_.input.word_bytes();
    const std::size_t output = static_cast<std::size_t>(filter_.channels_out) * filter_.output.word_bytes();
    const auto most = static_cast<std::int64_t>(message::largest_words_bytes);
    const std::int64_t by_input = most / static_cast<std::int64_t>(input);
    const std::int64_t by_output = most / (static_cast<std::int64_t>(output) * filter_.up) * filter_.down;
    return static_cast<int>(std::clamp<std::int64_t>(std::min(by_input, by_output), 1, greeting_->max_block_samples));
}

std::int64_t FramedSession::most_returned(std::int64_t block_samples) const {
    return (block_samples + filter_.down - 1) / filter_.down * filter_.up;
}

Outcome<void> FramedSession::begin_figures() {
    const Outcome<message::Counters> now = ask_counters();
    if (!now) return now.error();
    counters_at_start_ = *now;
    answers_ = 0;
    figures_ = WireFigures{};
    frames_bad_at_start_ = decoder_.frames_bad();
    first_sent_at_.reset();
    return {};
}

Outcome<void> FramedSession::await_answers() {
    while (window_.in_flight() > 0) {
        const Instant give_up = std::min(last_good_ + silence_limit(), progress_at_ + resend_after());
        if (const Outcome<std::size_t> moved = step(give_up); !moved) return moved.error();
        if (const Outcome<void> patient = check_patience(); !patient) return patient.error();
    }
    return {};
}

Outcome<void> FramedSession::settle() {
    if (error_) return *error_;
    if (!window_.is_open())
        return fail(Error{ErrorKind::defect, link_.name(), "a stream was settled that is not open", ""});
    if (const Outcome<void> answered = await_answers(); !answered) return answered;
    return begin_figures();
}

Outcome<BoardCounters> FramedSession::counters() {
    if (error_) return *error_;
    if (!window_.is_open())
        return Error{ErrorKind::defect, link_.name(), "the counters of a stream were asked without one", ""};
    // The board's buffer is sized for the stream's frames alone, so the question waits until they are answered.
    if (const Outcome<void> answered = await_answers(); !answered) return answered.error();
    const Outcome<message::Counters> now = ask_counters();
    if (!now) return now.error();
    BoardCounters since;
    since.frames_bad = now->frames_bad - counters_at_start_.frames_bad;
    since.bytes_lost = now->bytes_lost - counters_at_start_.bytes_lost;
    since.gaps = now->gaps - counters_at_start_.gaps;
    since.resent = now->resent - counters_at_start_.resent;
    since.blocks = now->blocks - counters_at_start_.blocks;
    return since;
}

}  // namespace halflsb
