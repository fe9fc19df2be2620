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

/* What an instant takes, and how many come back. */
struct shape {
    uint32_t in, out; /* bytes of all channels at one instant */
#if HALFLSB_RATES
    uint32_t up, down; /* of `down` instants come `up` */
#endif
    uint32_t fraction; /* of an input word's alignment: 0, 1 or 3 */
};

static struct {
    const struct halflsb_filter* filter; /* NULL: no stream is open */
    uint64_t index;                      /* samples processed since START */
    uint32_t nonce;
    uint16_t block_samples, expected, ahead;
    struct shape shape;
    uint8_t credit, in_gap;
} stream;

static struct halflsb_stream_counters counters;

void halflsb_stream_close(void) {
    stream.filter = NULL;
    counters.gaps = counters.resent = counters.blocks = 0;
}

#if HALFLSB_RATES

/* The most bytes that come of so many instants. */
static uint32_t most_out(const struct shape* shape, uint32_t count) {
    return (count + shape->down - 1u) / shape->down * shape->up * shape->out;
}

/* How far the input stands behind the output, so that no instant is overwritten before its turn: a group's first
 * instant may bring all that the group returns. */
static uint32_t behind_of(const struct shape* shape, uint32_t count) {
    const uint32_t group = shape->down * shape->in;
    uint32_t out = most_out(shape, 1), in = shape->in; /* after the first instant */
    if (out >= group) {                                /* or after the last group's first */
        out = most_out(shape, count) + group;
        in += count * shape->in;
    }
    return out > in ? (out - in + shape->fraction) & ~shape->fraction : 0;
}

static uint32_t run(const struct halflsb_filter* filter, const void* in, void* out, uint32_t count) {
    if (filter->process_rate != NULL) return filter->process_rate(in, out, (uint16_t)count);
    filter->process(in, out, (uint16_t)count);
    return count;
}

static int set_rate(struct shape* shape, const struct halflsb_filter* filter) {
    const int changes = filter->process_rate != NULL;
    shape->up = changes ? halflsb_cycle(filter->up) : 1u;
    shape->down = changes ? halflsb_cycle(filter->down) : 1u;
    return shape->up * shape->out <= HALFLSB_BLOCK_BYTES; /* and no product below leaves its 32 bits */
}

static int same_rate(const struct halflsb_filter* filter) {
    struct shape shape = stream.shape;
    (void)set_rate(&shape, filter);
    return shape.up == stream.shape.up && shape.down == stream.shape.down;
}

/* Of an answer's samples, with the input that stands there before. */
static uint32_t room_of(const struct shape* shape, uint32_t count) {
    const uint32_t in = count * shape->in + behind_of(shape, count), out = most_out(shape, count);
    return in > out ? in : out;
}

static uint32_t largest_block(const struct shape* shape, uint32_t asked) {
    while (asked != 0 && room_of(shape, asked) > HALFLSB_BLOCK_BYTES) asked--;
    return asked;
}

#else

static uint32_t wider_of(const struct shape* shape) { return shape->in > shape->out ? shape->in : shape->out; }
static uint32_t behind_of(const struct shape* shape, uint32_t count) {
    return (count * (wider_of(shape) - shape->in) + shape->fraction) & ~shape->fraction;
}
static uint32_t room_of(const struct shape* shape, uint32_t count) { return count * wider_of(shape); }
static uint32_t largest_block(const struct shape* shape, uint32_t asked) {
    const uint32_t most = HALFLSB_BLOCK_BYTES / wider_of(shape);
    return asked < most ? asked : most;
}
static uint32_t run(const struct halflsb_filter* filter, const void* in, void* out, uint32_t count) {
    filter->process(in, out, (uint16_t)count);
    return count;
}
#define set_rate(shape, filter) 1
#define same_rate(filter) 1

#endif

enum halflsb_reason halflsb_stream_open(const struct halflsb_board* board, const struct halflsb_frame* start) {
    const uint32_t nonce = halflsb_get32(start->head + 1);
    const struct halflsb_filter* filter;
    struct shape shape;
    uint32_t block = halflsb_get16(start->head + 6), credit;
    if (stream.filter != NULL && nonce == stream.nonce) return HALFLSB_ACCEPTED;
    if (start->head[5] >= board->filter_count) return HALFLSB_NO_SUCH_THING;
    if (block == 0 || block > halflsb_block_samples(board)) return HALFLSB_OUT_OF_RANGE;
    if (halflsb_get32(start->head + 8) != 0) return HALFLSB_NOT_SUPPORTED;
    filter = &board->filters[start->head[5]];
    shape.in = halflsb_word_bytes(filter->input);
    shape.fraction = halflsb_word_alignment((uint8_t)shape.in) - 1u;
    shape.in *= filter->channels_in;
    shape.out = (uint32_t)halflsb_word_bytes(filter->output) * filter->channels_out;
    if (shape.in == 0 || shape.out == 0 || !set_rate(&shape, filter)) return HALFLSB_NOT_SUPPORTED;
    /* Smaller than asked for when this filter's words are wider, or more of them come back. */
    block = largest_block(&shape, block);
    if (block == 0) return HALFLSB_NOT_SUPPORTED;

    credit = (HALFLSB_RING_BYTES - HALFLSB_RING_SPARE_BYTES) / HALFLSB_RECEIVE_BYTES(block * shape.in);
    if (credit > HALFLSB_MOST_CREDIT) credit = HALFLSB_MOST_CREDIT;
    if (board->credit_blocks != 0 && credit > board->credit_blocks) credit = board->credit_blocks;
    stream.block_samples = (uint16_t)block;
    stream.credit = halflsb_answers_open(room_of(&shape, block), (uint8_t)credit);
    stream.shape = shape;
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
    const struct halflsb_filter* filter = stream.filter;
    const uint32_t bytes = frame->bytes - SAMPLES, count = bytes / stream.shape.in;
    uint8_t* samples = answer + RESPONSE_SAMPLES;
    uint8_t* input = samples + behind_of(&stream.shape, count);
    uint32_t total = 0, largest, out_bytes;

    halflsb_frame_copy(frame, SAMPLES, input);
    halflsb_order_words(input, bytes, filter->input);
    if (board->tick_bits != 0) total = board->ticks();
    out_bytes = run(filter, input, samples, count) * stream.shape.out;
    if (board->tick_bits != 0) total = board->ticks() - total;
    if (board->tick_bits < 32) total &= ((uint32_t)1 << board->tick_bits) - 1u;
    halflsb_order_words(samples, out_bytes, filter->output);

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
    return bytes != 0 && bytes % stream.shape.in == 0 && bytes / stream.shape.in <= stream.block_samples;
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
        next->channels_out != was->channels_out || !same_rate(next))
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
