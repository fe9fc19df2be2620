/* SPDX-License-Identifier: 0BSD
 *
 * Frames from the receive ring and frames to the host. A received frame stays encoded in the ring until it is
 * released: it is decoded once to check it, and a block of samples a second time, straight to where the filter
 * reads it. That saves a buffer, and a broken frame never touches a kept answer.
 */
#ifndef HALFLSB_FRAME_H
#define HALFLSB_FRAME_H

#include "ring.h"

#define HALFLSB_CRC_BYTES 4
/* The longest content that is not a block: LOAD of 8 values. */
#define HALFLSB_HEAD_BYTES 50

struct halflsb_frame {
    halflsb_ring_index first, delimiter;
    uint32_t bytes;                   /* of type and body, without the CRC */
    uint8_t head[HALFLSB_HEAD_BYTES]; /* the beginning of the content */
};

enum halflsb_arrival { HALFLSB_NOTHING, HALFLSB_BROKEN, HALFLSB_WHOLE };

/* The next frame. A broken one is already released. */
enum halflsb_arrival halflsb_frame_receive(struct halflsb_frame* frame);
/* Content bytes from `offset` to the end of the body. */
void halflsb_frame_copy(const struct halflsb_frame* frame, uint32_t offset, uint8_t* to);
void halflsb_frame_release(const struct halflsb_frame* frame);

/* A REFUSED of that frame, to `to`; how many bytes (5). */
uint32_t halflsb_put_refused(uint8_t* to, const struct halflsb_frame* frame, uint8_t reason);

/* Sends type and body of so many bytes, and writes the CRC behind them: there must be room for it. */
void halflsb_frame_send(uint8_t* content, size_t bytes, void (*write)(const uint8_t* bytes, size_t count));

#endif
