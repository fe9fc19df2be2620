/* SPDX-License-Identifier: 0BSD */
#include "bytes.h"

uint16_t halflsb_get16(const uint8_t* p) { return (uint16_t)(p[0] | ((unsigned)p[1] << 8)); }

uint32_t halflsb_get32(const uint8_t* p) { return halflsb_get16(p) | ((uint32_t)halflsb_get16(p + 2) << 16); }

uint8_t* halflsb_put8(uint8_t* p, unsigned value) {
    *p = (uint8_t)(value & 0xFFu);
    return p + 1;
}

uint8_t* halflsb_put16(uint8_t* p, unsigned value) {
    p[0] = (uint8_t)(value & 0xFFu);
    p[1] = (uint8_t)((value >> 8) & 0xFFu);
    return p + 2;
}

uint8_t* halflsb_put32(uint8_t* p, uint32_t value) {
    return halflsb_put16(halflsb_put16(p, (unsigned)(value & 0xFFFFu)), (unsigned)(value >> 16));
}
