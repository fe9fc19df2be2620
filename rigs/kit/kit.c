/* SPDX-License-Identifier: 0BSD
 *
 * The main loop's door: takes a frame, answers what is outside the stream, hands the rest to the stream.
 */
#include <string.h>

#include "bytes.h"
#include "greeting.h"
#include "halflsb_kit.h"
#include "stream.h"

#define ECHO_BYTES 32

static const struct halflsb_board* the_board;
static uint32_t frames_bad;

void halflsb_start(const struct halflsb_board* board) {
    the_board = board;
    frames_bad = 0;
    halflsb_ring_clear();
    halflsb_stream_close();
}

/* Each returns the end of the answer's body, or NULL with the reason; the body begins with the nonce. */
static uint8_t* put_counters(uint8_t* to) {
    const struct halflsb_stream_counters* counters = halflsb_stream_counters();
    to = halflsb_put32(halflsb_put32(to, frames_bad), halflsb_ring_bytes_lost());
    return halflsb_put32(halflsb_put32(halflsb_put32(to, counters->gaps), counters->resent), counters->blocks);
}

static uint8_t* answer_start(const struct halflsb_frame* frame, uint8_t* to, enum halflsb_reason* reason) {
    *reason = frame->bytes == 12 ? halflsb_stream_open(the_board, frame) : HALFLSB_OUT_OF_RANGE;
    if (*reason != HALFLSB_ACCEPTED) return NULL;
    return halflsb_put8(halflsb_put16(to, halflsb_stream_block_samples()), halflsb_stream_credit());
}

static uint8_t* answer(const struct halflsb_frame* frame, uint8_t* to, enum halflsb_reason* reason) {
    const uint8_t* body = frame->head + 5;
    *reason = HALFLSB_OUT_OF_RANGE;
    switch (frame->head[0]) {
        case HALFLSB_HELLO:
            if (frame->bytes != 6) return NULL;
            return halflsb_greeting_page(the_board, *body, halflsb_put8(to, *body));
        case HALFLSB_START:
            return answer_start(frame, to, reason);
        case HALFLSB_STATUS:
            return frame->bytes == 5 ? put_counters(to) : NULL;
        case HALFLSB_ECHO:
            if (frame->bytes < 5 || frame->bytes > 5 + ECHO_BYTES) return NULL;
            memcpy(to, body, frame->bytes - 5);
            return to + (frame->bytes - 5);
        default:
            *reason = HALFLSB_UNKNOWN_TYPE;
            return NULL;
    }
}

static void answer_outside_stream(const struct halflsb_frame* frame) {
    static const uint8_t delimiter = 0;
    uint8_t content[HALFLSB_GREETING_BYTES], *end;
    enum halflsb_reason reason;
    memcpy(content, frame->head, 5);
    content[0] = (uint8_t)(frame->head[0] | 0x80u);
    end = answer(frame, content + 5, &reason);
    if (end == NULL) {
        end = content + halflsb_put_refused(content, frame, (uint8_t)reason);
    }
    the_board->write(&delimiter, 1); /* ends what a boot message left on the line */
    halflsb_frame_send(content, (size_t)(end - content), the_board->write);
}

int halflsb_poll(void) {
    struct halflsb_frame frame;
    const enum halflsb_arrival arrival = halflsb_frame_receive(&frame);
    if (arrival == HALFLSB_NOTHING) return 0;
    if (arrival == HALFLSB_BROKEN) {
        frames_bad++;
        return 1;
    }
    if (frame.head[0] >= HALFLSB_SAMPLES && frame.head[0] <= HALFLSB_SELECT)
        halflsb_stream_take(the_board, &frame);
    else if (frame.head[0] < 0x80u) /* from there on it is an answer: our own, when a terminal echoes */
        answer_outside_stream(&frame);
    halflsb_frame_release(&frame);
    return 1;
}
