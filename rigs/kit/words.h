/* SPDX-License-Identifier: 0BSD
 *
 * Sample words: their sizes, and their order in memory against that on the wire.
 */
#ifndef HALFLSB_WORDS_H
#define HALFLSB_WORDS_H

#include "halflsb_kit.h"

#ifndef HALFLSB_BIG_ENDIAN
#if defined(__BYTE_ORDER__) && defined(__ORDER_BIG_ENDIAN__)
#define HALFLSB_BIG_ENDIAN (__BYTE_ORDER__ == __ORDER_BIG_ENDIAN__)
#else
#define HALFLSB_BIG_ENDIAN 0
#endif
#endif

/* 0 for a number that this version does not know. */
static inline uint8_t halflsb_word_bytes(uint8_t format) {
    if (format == HALFLSB_Q15 || format == HALFLSB_I16) return 2;
    return format == HALFLSB_Q31 || format == HALFLSB_I32 || format == HALFLSB_F32 ? 4 : 0;
}

/* Wire order to the machine's and back. */
static inline void halflsb_order_words(uint8_t* words, uint32_t bytes, uint8_t word_bytes) {
#if HALFLSB_BIG_ENDIAN
    for (; bytes >= word_bytes; bytes -= word_bytes, words += word_bytes) {
        uint8_t low = 0, high = (uint8_t)(word_bytes - 1);
        for (; low < high; low++, high--) {
            const uint8_t swap = words[low];
            words[low] = words[high];
            words[high] = swap;
        }
    }
#else
    (void)words;
    (void)bytes;
    (void)word_bytes;
#endif
}

#endif
