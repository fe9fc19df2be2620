/* SPDX-License-Identifier: 0BSD
 *
 * The pages of docs/wire.md, 2.1.
 */
#ifndef HALFLSB_GREETING_H
#define HALFLSB_GREETING_H

#include "halflsb_kit.h"

/* Type, nonce, page, pages; the longest page (69); CRC. */
#define HALFLSB_GREETING_BYTES 80

/* What the board takes: as compiled, or as the board says when that is less. */
uint16_t halflsb_block_samples(const struct halflsb_board* board);
uint8_t halflsb_credit_blocks(const struct halflsb_board* board);

/* What `up` or `down` of a filter means. */
static inline uint16_t halflsb_cycle(uint16_t said) { return said == 0 ? 1 : said; }

/* `pages` and the page, to `to`; the end of it. NULL when there is no such page. */
uint8_t* halflsb_greeting_page(const struct halflsb_board* board, uint8_t page, uint8_t* to);

#endif
