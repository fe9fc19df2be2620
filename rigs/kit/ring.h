/* SPDX-License-Identifier: 0BSD
 *
 * Bytes from the receive interrupt (halflsb_receive_byte, halflsb_receive_overrun) to the main loop. One writer,
 * one reader, no lock: each index has one owner.
 */
#ifndef HALFLSB_RING_H
#define HALFLSB_RING_H

#include "layout.h"

/* Wide enough for the ring and no wider, so that small processors read it in one go. */
#if HALFLSB_CREDIT_BLOCKS * (HALFLSB_BLOCK_BYTES + 64) * 257 / 256 < 60000
typedef uint16_t halflsb_ring_index;
#else
typedef uint32_t halflsb_ring_index;
#endif

void halflsb_ring_clear(void);

/* The index of the next delimiter at or after the oldest byte: 1 when there is one. 0 when there is none yet; a
 * ring that is full without one is emptied, and the rest of that frame will be passed over. */
int halflsb_ring_find_delimiter(halflsb_ring_index* delimiter);
halflsb_ring_index halflsb_ring_oldest(void);
uint8_t halflsb_ring_at(halflsb_ring_index index);
halflsb_ring_index halflsb_ring_after(halflsb_ring_index index);
/* The frame that ends at the next delimiter has lost its beginning. */
int halflsb_ring_beginning_is_lost(void);
/* Frees everything up to and with `delimiter`. */
void halflsb_ring_release(halflsb_ring_index delimiter);

uint32_t halflsb_ring_bytes_lost(void);

#endif
