/* SPDX-License-Identifier: 0BSD
 *
 * The stream of docs/wire.md, 3: blocks and commands in order, each exactly once.
 */
#ifndef HALFLSB_STREAM_H
#define HALFLSB_STREAM_H

#include "frame.h"

enum halflsb_type {
    HALFLSB_HELLO = 0x01,
    HALFLSB_START = 0x02,
    HALFLSB_STATUS = 0x03,
    HALFLSB_ECHO = 0x04,
    HALFLSB_SAMPLES = 0x10,
    HALFLSB_RESET = 0x11,
    HALFLSB_SET = 0x12,
    HALFLSB_LOAD = 0x13,
    HALFLSB_SELECT = 0x14,
    HALFLSB_GREETING = 0x81,
    HALFLSB_STARTED = 0x82,
    HALFLSB_COUNTERS = 0x83,
    HALFLSB_ECHOED = 0x84,
    HALFLSB_RESPONSE = 0x90,
    HALFLSB_DONE = 0x91,
    HALFLSB_EXPECT = 0x92,
    HALFLSB_REFUSED = 0xFF
};

enum halflsb_reason {
    HALFLSB_ACCEPTED = 0,
    HALFLSB_UNKNOWN_TYPE = 1,
    HALFLSB_NO_STREAM = 2,
    HALFLSB_WRONG_INDEX = 3,
    HALFLSB_NO_SUCH_THING = 4,
    HALFLSB_OUT_OF_RANGE = 5,
    HALFLSB_NOT_SUPPORTED = 6
};

struct halflsb_stream_counters {
    uint32_t gaps, resent, blocks;
};

void halflsb_stream_close(void);
/* START: opens a stream, unless that nonce's stream is open already. */
enum halflsb_reason halflsb_stream_open(const struct halflsb_board* board, const struct halflsb_frame* start);
uint16_t halflsb_stream_block_samples(void);
uint8_t halflsb_stream_credit(void);
/* A frame of type 0x10 to 0x14: answers it. */
void halflsb_stream_take(const struct halflsb_board* board, const struct halflsb_frame* frame);
const struct halflsb_stream_counters* halflsb_stream_counters(void);

#endif
