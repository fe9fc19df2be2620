/* SPDX-License-Identifier: 0BSD */
#include "stream.h"

#include "answers.h"
#include "bytes.h"
#include "greeting.h"
#include "words.h"

/* Offsets in a content: type (1), seq (2), then samples, or `at` (8) and the command's own fields. */
#define SEQ 1
#define SAMPLES 3
#define AT 3
#define FIELDS 11
/* In a RESPONSE: type (1), seq (2), ticks_total (4), ticks_largest (3), samples. */
#define RESPONSE_TICKS 3
#define RESPONSE_SAMPLES 10

#define TICKS_LARGEST_CAP 0xFFFFFFu

static struct {
    const struct halflsb_filter* filter; /* NULL: no stream is open */
    uint64_t index;                      /* samples processed since START */
    uint32_t nonce;
    uint16_t block_samples, expected, ahead;
    uint16_t in, out; /* bytes of all channels at one instant */
    uint8_t in_alignment;
    uint8_t credit, in_gap;
} stream;

static struct halflsb_stream_counters counters;

void halflsb_stream_close(void) {
    stream.filter = NULL;
    counters.gaps = counters.resent = counters.blocks = 0;
}

enum halflsb_reason halflsb_stream_open(const struct halflsb_board* board, const struct halflsb_frame* start) {
    const uint32_t nonce = halflsb_get32(start->head + 1);
    const uint16_t asked = halflsb_get16(start->head + 6);
    const struct halflsb_filter* filter;
    uint8_t in_word;
    uint32_t in, out, wider, most, credit;
    if (stream.filter != NULL && nonce == stream.nonce) return HALFLSB_ACCEPTED;
    if (start->head[5] >= board->filter_count) return HALFLSB_NO_SUCH_THING;
    if (asked == 0 || asked > halflsb_block_samples(board)) return HALFLSB_OUT_OF_RANGE;
    if (halflsb_get32(start->head + 8) != 0) return HALFLSB_NOT_SUPPORTED;
    filter = &board->filters[start->head[5]];
    in_word = halflsb_word_bytes(filter->input);
    in = (uint32_t)in_word * filter->channels_in;
    out = (uint32_t)halflsb_word_bytes(filter->output) * filter->channels_out;
    wider = in > out ? in : out;
    if (in == 0 || out == 0 || wider > HALFLSB_BLOCK_BYTES) return HALFLSB_NOT_SUPPORTED;

    most = HALFLSB_BLOCK_BYTES / wider; /* fewer than compiled for, when this filter's words are wider */
    stream.block_samples = asked < most ? asked : (uint16_t)most;
    credit = (HALFLSB_RING_BYTES - HALFLSB_RING_SPARE_BYTES) / HALFLSB_RECEIVE_BYTES(stream.block_samples * in);
    if (credit > HALFLSB_MOST_CREDIT) credit = HALFLSB_MOST_CREDIT;
    if (board->credit_blocks != 0 && credit > board->credit_blocks) credit = board->credit_blocks;
    stream.credit = halflsb_answers_open(stream.block_samples * wider, (uint8_t)credit);
    stream.in_alignment = halflsb_word_alignment(in_word);
    stream.in = (uint16_t)in;
    stream.out = (uint16_t)out;
    stream.filter = filter;
    stream.nonce = nonce;
    stream.index = 0;
    stream.expected = 0;
    stream.in_gap = 0;
    filter->reset();
    return HALFLSB_ACCEPTED;
}

uint16_t halflsb_stream_block_samples(void) { return stream.block_samples; }
uint8_t halflsb_stream_credit(void) { return stream.credit; }
const struct halflsb_stream_counters* halflsb_stream_counters(void) { return &counters; }

/* Answers in place: the input stands so far behind the output that no sample is overwritten before its turn. */
static uint32_t process(const struct halflsb_board* board, const struct halflsb_frame* frame, uint8_t* answer) {
    const uint32_t bytes = frame->bytes - SAMPLES, count = bytes / stream.in, out_bytes = count * stream.out;
    const uint32_t fraction = stream.in_alignment - 1u; /* of a word: 0, 1 or 3 */
    const uint32_t behind = out_bytes > bytes ? (out_bytes - bytes + fraction) & ~fraction : 0;
    uint8_t* samples = answer + RESPONSE_SAMPLES;
    uint32_t total = 0, largest;

    halflsb_frame_copy(frame, SAMPLES, samples + behind);
    halflsb_order_words(samples + behind, bytes, stream.filter->input);
    if (board->tick_bits != 0) total = board->ticks();
    stream.filter->process(samples + behind, samples, (uint16_t)count);
    if (board->tick_bits != 0) total = board->ticks() - total;
    if (board->tick_bits < 32) total &= ((uint32_t)1 << board->tick_bits) - 1u;
    halflsb_order_words(samples, out_bytes, stream.filter->output);

    largest = total / count + (total % count != 0);
    if (largest > TICKS_LARGEST_CAP) largest = TICKS_LARGEST_CAP;
    answer[0] = HALFLSB_RESPONSE;
    halflsb_put32(answer + RESPONSE_TICKS, total);
    halflsb_put16(answer + RESPONSE_TICKS + 4, (unsigned)(largest & 0xFFFFu));
    halflsb_put8(answer + RESPONSE_TICKS + 6, (unsigned)(largest >> 16));
    stream.index += count;
    counters.blocks++;
    return RESPONSE_SAMPLES + out_bytes;
}

static int samples_fit(const struct halflsb_frame* frame) {
    const uint32_t bytes = frame->bytes - SAMPLES;
    return bytes != 0 && bytes % stream.in == 0 && bytes / stream.in <= stream.block_samples;
}

static enum halflsb_reason set(const struct halflsb_board* board, const uint8_t* fields, uint32_t bytes) {
    const struct halflsb_setting* setting;
    int32_t value;
    if (bytes != 5) return HALFLSB_OUT_OF_RANGE;
    if (fields[0] >= board->setting_count) return HALFLSB_NO_SUCH_THING;
    setting = &board->settings[fields[0]];
    value = (int32_t)halflsb_get32(fields + 1);
    if (value < setting->minimum || value > setting->maximum) return HALFLSB_OUT_OF_RANGE;
    *setting->value = value;
    if (setting->changed != NULL) setting->changed();
    return HALFLSB_ACCEPTED;
}

static enum halflsb_reason load(const uint8_t* fields, uint32_t bytes) {
    int32_t values[8];
    uint8_t count, i;
    if (bytes < 3 + 4 || bytes > 3 + 4 * 8 || (bytes - 3) % 4 != 0) return HALFLSB_OUT_OF_RANGE;
    if (fields[0] >= stream.filter->tables) return HALFLSB_NO_SUCH_THING;
    count = (uint8_t)((bytes - 3) / 4);
    for (i = 0; i < count; i++) values[i] = (int32_t)halflsb_get32(fields + 3 + 4 * i);
    return stream.filter->load(fields[0], halflsb_get16(fields + 1), values, count) ? HALFLSB_ACCEPTED
                                                                                    : HALFLSB_OUT_OF_RANGE;
}

static enum halflsb_reason select_filter(const struct halflsb_board* board, const uint8_t* fields, uint32_t bytes) {
    const struct halflsb_filter *was = stream.filter, *next;
    if (bytes != 1) return HALFLSB_OUT_OF_RANGE;
    if (fields[0] >= board->filter_count) return HALFLSB_NO_SUCH_THING;
    next = &board->filters[fields[0]];
    if (next->input != was->input || next->output != was->output || next->channels_in != was->channels_in ||
        next->channels_out != was->channels_out)
        return HALFLSB_OUT_OF_RANGE;
    stream.filter = next;
    next->reset();
    return HALFLSB_ACCEPTED;
}

static enum halflsb_reason command(const struct halflsb_board* board, const struct halflsb_frame* frame) {
    const uint8_t* fields = frame->head + FIELDS;
    uint32_t bytes;
    if (frame->bytes < FIELDS) return HALFLSB_OUT_OF_RANGE;
    if (halflsb_get32(frame->head + AT) != (uint32_t)(stream.index & 0xFFFFFFFFu) ||
        halflsb_get32(frame->head + AT + 4) != (uint32_t)(stream.index >> 32))
        return HALFLSB_WRONG_INDEX;
    bytes = frame->bytes - FIELDS;
    switch (frame->head[0]) {
        case HALFLSB_SET:
            return set(board, fields, bytes);
        case HALFLSB_LOAD:
            return load(fields, bytes);
        case HALFLSB_SELECT:
            return select_filter(board, fields, bytes);
        default:
            break;
    }
    if (bytes != 0) return HALFLSB_OUT_OF_RANGE;
    stream.filter->reset();
    return HALFLSB_ACCEPTED;
}

/* Processes the frame whose turn it is; its answer is kept, a refusal too, and its number is used. */
static void take_expected(const struct halflsb_board* board, const struct halflsb_frame* frame) {
    uint8_t* answer = halflsb_answers_next();
    enum halflsb_reason reason;
    uint32_t bytes = 0;
    if (frame->head[0] == HALFLSB_SAMPLES) {
        reason = samples_fit(frame) ? HALFLSB_ACCEPTED : HALFLSB_OUT_OF_RANGE;
        if (reason == HALFLSB_ACCEPTED) bytes = process(board, frame, answer);
    } else {
        reason = command(board, frame);
        answer[0] = HALFLSB_DONE;
        bytes = FIELDS;
        halflsb_put32(halflsb_put32(answer + AT, (uint32_t)(stream.index & 0xFFFFFFFFu)),
                      (uint32_t)(stream.index >> 32));
    }
    if (reason != HALFLSB_ACCEPTED)
        bytes = halflsb_put_refused(answer, frame, (uint8_t)reason);
    else
        halflsb_put16(answer + SEQ, stream.expected);
    halflsb_answers_keep(bytes);
    stream.expected++;
    stream.in_gap = 0;
    halflsb_frame_send(answer, bytes, board->write);
}

void halflsb_stream_take(const struct halflsb_board* board, const struct halflsb_frame* frame) {
    uint8_t answer[5 + HALFLSB_CRC_BYTES], *kept;
    uint16_t seq, back;
    uint32_t bytes;
    if (frame->bytes < SAMPLES || stream.filter == NULL) {
        bytes = halflsb_put_refused(answer, frame, stream.filter == NULL ? HALFLSB_NO_STREAM : HALFLSB_OUT_OF_RANGE);
        halflsb_frame_send(answer, bytes, board->write);
        return;
    }
    seq = halflsb_get16(frame->head + SEQ);
    back = (uint16_t)(stream.expected - seq);
    if (back == 0) {
        take_expected(board, frame);
        return;
    }
    kept = halflsb_answers_find(back, &bytes);
    if (kept != NULL) {
        counters.resent++;
        halflsb_frame_send(kept, bytes, board->write);
        return;
    }
    /* Once for a run of frames ahead; again when the host has begun the run anew and lost its first again. */
    counters.gaps++;
    if (!stream.in_gap || (uint16_t)(seq - stream.ahead) >= 0x8000u) {
        answer[0] = HALFLSB_EXPECT;
        halflsb_put16(answer + SEQ, stream.expected);
        halflsb_frame_send(answer, 3, board->write);
    }
    stream.in_gap = 1;
    stream.ahead = (uint16_t)(seq + 1u);
}
