/* SPDX-License-Identifier: 0BSD */
#include "greeting.h"

#include <string.h>

#include "bytes.h"

#define PROTOCOL 1
#define TEXT_BYTES 24
#define BUILD_ID_BYTES 32

uint16_t halflsb_block_samples(const struct halflsb_board* board) {
    const uint16_t less = board->block_samples;
    return less != 0 && less < HALFLSB_BLOCK_SAMPLES ? less : (uint16_t)HALFLSB_BLOCK_SAMPLES;
}

uint8_t halflsb_credit_blocks(const struct halflsb_board* board) {
    const uint8_t less = board->credit_blocks;
    return less != 0 && less < HALFLSB_CREDIT_BLOCKS ? less : (uint8_t)HALFLSB_CREDIT_BLOCKS;
}

static uint8_t* put_text(uint8_t* to, const char* text) {
    uint8_t count = 0;
    while (text != NULL && count < TEXT_BYTES && text[count] != '\0') {
        to[1 + count] = (uint8_t)text[count];
        count++;
    }
    to[0] = count;
    return to + 1 + count;
}

static uint8_t* put_board(uint8_t* to, const struct halflsb_board* board) {
    const uint8_t most = board->build_id == NULL ? (uint8_t)0 : board->build_id_bytes;
    const uint8_t count = most > BUILD_ID_BYTES ? (uint8_t)BUILD_ID_BYTES : most;
    to = halflsb_put8(halflsb_put8(to, PROTOCOL), count);
    if (count > 0) memcpy(to, board->build_id, count);
    to = put_text(to + count, board->serial);
    to = halflsb_put8(halflsb_put8(to, board->filter_count), board->setting_count);
    to = halflsb_put8(halflsb_put16(to, halflsb_block_samples(board)), halflsb_credit_blocks(board));
    return halflsb_put8(halflsb_put32(to, board->tick_bits == 0 ? 0 : board->tick_hz), board->tick_bits);
}

static uint8_t* put_filter(uint8_t* to, const struct halflsb_filter* filter) {
    const uint8_t facts[7] = {filter->injection,    filter->input, filter->output, filter->channels_in,
                              filter->channels_out, 0 /* nodes */, filter->tables};
    to = put_text(to, filter->name);
    memcpy(to, facts, sizeof facts);
    to += sizeof facts;
#if HALFLSB_RATES
    if (filter->process_rate != NULL)
        to = halflsb_put16(halflsb_put16(to, halflsb_cycle(filter->up)), halflsb_cycle(filter->down));
#endif
    return to;
}

static uint8_t* put_setting(uint8_t* to, const struct halflsb_setting* setting) {
    to = halflsb_put32(put_text(to, setting->name), (uint32_t)setting->minimum);
    return halflsb_put32(halflsb_put32(to, (uint32_t)setting->maximum), (uint32_t)*setting->value);
}

uint8_t* halflsb_greeting_page(const struct halflsb_board* board, uint8_t page, uint8_t* to) {
    const unsigned filters = board->filter_count;
    const unsigned pages = 1u + filters + board->setting_count;
    if (page >= pages) return NULL;
    to = halflsb_put8(to, pages);
    if (page == 0) return put_board(to, board);
    if (page <= filters) return put_filter(to, &board->filters[page - 1u]);
    return put_setting(to, &board->settings[page - 1u - filters]);
}
