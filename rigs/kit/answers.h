/* SPDX-License-Identifier: 0BSD
 *
 * The last answers of the stream, kept so that a repeated frame is answered without computing again. An answer
 * is made where it is kept. How many fit depends on the block size of the stream.
 */
#ifndef HALFLSB_ANSWERS_H
#define HALFLSB_ANSWERS_H

#include "layout.h"

/* Forgets all; from now on answers hold up to samples_bytes of samples. How many are kept: at most `most`. */
uint8_t halflsb_answers_open(uint32_t samples_bytes, uint8_t most);
/* Where the next answer's content begins: type, seq, ... The samples of a RESPONSE, at content + 10, are aligned
 * to 4 bytes. Takes the place of the oldest answer. */
uint8_t* halflsb_answers_next(void);
/* The next answer is complete, its content so many bytes. */
void halflsb_answers_keep(uint32_t bytes);
/* The answer of `back` frames ago, 1 the latest; NULL when it is not kept. */
uint8_t* halflsb_answers_find(uint16_t back, uint32_t* bytes);

#endif
