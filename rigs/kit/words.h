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

/* Of the container; 0 for a number or a layout that this version does not know. */
static inline uint8_t halflsb_word_bytes(uint8_t format) {
    static const uint8_t bytes[] = {0, 2, 4, 2, 4, 4, 1, 1, 4, 1, 2, 2}; /* by number, right-justified */
    const uint8_t number = format & 0x1Fu, justification = format & 0x60u;
    if (number >= sizeof bytes) return 0;
    if (justification == 0) return bytes[number];
    if (justification == HALFLSB_LEFT) return number == HALFLSB_I24 || number == HALFLSB_U12 ? bytes[number] : 0;
    return justification == HALFLSB_PACKED && number == HALFLSB_I24 ? 3 : 0;
}

/* What words of that many bytes are aligned to. */
static inline uint8_t halflsb_word_alignment(uint8_t word_bytes) { return word_bytes == 3 ? 1 : word_bytes; }

/* Wire order to the machine's and back; a format that says its order, or is packed, stays as it is. */
static inline void halflsb_order_words(uint8_t* words, uint32_t bytes, uint8_t format) {
#if HALFLSB_BIG_ENDIAN
    const uint8_t word_bytes = halflsb_word_bytes(format);
    if ((format & HALFLSB_BIG) != 0 || word_bytes == 3) return;
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
    (void)format;
#endif
}

#endif
