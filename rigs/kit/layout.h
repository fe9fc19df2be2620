/* SPDX-License-Identifier: 0BSD
 *
 * The sizes that follow from the three macros of halflsb_kit.h. README.md gives them as formulas.
 */
#ifndef HALFLSB_LAYOUT_H
#define HALFLSB_LAYOUT_H

#include "halflsb_kit.h"

#if HALFLSB_BLOCK_SAMPLES < 1 || HALFLSB_BLOCK_SAMPLES > 4096
#error "HALFLSB_BLOCK_SAMPLES: 1 .. 4096"
#endif
#if HALFLSB_CREDIT_BLOCKS < 1 || HALFLSB_CREDIT_BLOCKS > 64
#error "HALFLSB_CREDIT_BLOCKS: 1 .. 64"
#endif
#if HALFLSB_WORD_BYTES < 1 || HALFLSB_WORD_BYTES > 16
#error "HALFLSB_WORD_BYTES: 1 .. 16"
#endif

#if HALFLSB_BLOCK_SAMPLES * HALFLSB_WORD_BYTES > 65000
#error "HALFLSB_BLOCK_SAMPLES * HALFLSB_WORD_BYTES: at most 65000, a kept answer's length has 16 bits"
#endif

/* docs/wire.md, 2.2: more than this is never granted. */
#define HALFLSB_MOST_CREDIT 64

/* What a SAMPLES frame of so many sample bytes costs on the wire: type, seq, CRC; COBS; its delimiter and one
 * that the sender may put in front. A LOAD of 8 values is 50 bytes of content. */
#define HALFLSB_STUFFED_BYTES(content) ((content) + 1 + (content) / 254 + 2)
#define HALFLSB_LOAD_FRAME_BYTES HALFLSB_STUFFED_BYTES(50)
#define HALFLSB_SAMPLES_FRAME_BYTES(samples_bytes) HALFLSB_STUFFED_BYTES((samples_bytes) + 7)
#define HALFLSB_RECEIVE_BYTES(samples_bytes)                               \
    (HALFLSB_SAMPLES_FRAME_BYTES(samples_bytes) > HALFLSB_LOAD_FRAME_BYTES \
         ? HALFLSB_SAMPLES_FRAME_BYTES(samples_bytes)                      \
         : HALFLSB_LOAD_FRAME_BYTES)

/* Room for a STATUS or an ECHO beside a full window, and the byte that tells a full ring from an empty one. */
#define HALFLSB_RING_SPARE_BYTES 65

/* A kept answer: its length (2), type, seq, ticks (10), samples from a multiple of 4 on, CRC (4). */
#define HALFLSB_ANSWER_HEAD_BYTES 12
#define HALFLSB_ANSWER_BYTES(samples_bytes) (HALFLSB_ANSWER_HEAD_BYTES + (((samples_bytes) + 3) / 4) * 4 + 4)

#define HALFLSB_BLOCK_BYTES (HALFLSB_BLOCK_SAMPLES * HALFLSB_WORD_BYTES)
#define HALFLSB_RING_BYTES \
    (HALFLSB_CREDIT_BLOCKS * HALFLSB_RECEIVE_BYTES(HALFLSB_BLOCK_BYTES) + HALFLSB_RING_SPARE_BYTES)
#define HALFLSB_ANSWERS_BYTES (HALFLSB_CREDIT_BLOCKS * HALFLSB_ANSWER_BYTES(HALFLSB_BLOCK_BYTES))

#endif
