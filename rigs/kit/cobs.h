/* SPDX-License-Identifier: 0BSD
 *
 * Consistent Overhead Byte Stuffing: S. Cheshire and M. Baker, IEEE/ACM Transactions on Networking 7(2), 1999.
 * The encoder writes runs straight from the content, the decoder takes a byte at a time: neither has a buffer.
 */
#ifndef HALFLSB_COBS_H
#define HALFLSB_COBS_H

#include <stddef.h>
#include <stdint.h>

/* Without the delimiter. One `write` for each code byte and for each run; never of zero bytes. */
void halflsb_cobs_encode(const uint8_t* content, size_t count, void (*write)(const uint8_t* bytes, size_t count));

/* Starts as {0, 0}. */
struct halflsb_cobs_decoder {
    uint8_t left;     /* bytes of the running group still to come */
    uint8_t zero_due; /* the running group stands for a zero, if another group follows */
};

/* The content byte that this encoded, nonzero byte completes, or -1. The frame is whole when `left` is 0 at the
 * delimiter. A final group of 254 bytes is taken with and without a 0x01 behind it. */
static inline int halflsb_cobs_decode(struct halflsb_cobs_decoder* decoder, uint8_t byte) {
    int content;
    if (decoder->left != 0) {
        decoder->left--;
        return byte;
    }
    content = decoder->zero_due ? 0 : -1;
    decoder->left = (uint8_t)(byte - 1);
    decoder->zero_due = byte != 0xFF;
    return content;
}

#endif
