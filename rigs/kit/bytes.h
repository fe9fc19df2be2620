/* SPDX-License-Identifier: 0BSD
 *
 * Little-endian integers in byte strings, whatever the machine's own order and alignment. Each put returns the
 * place behind what it wrote. Not inline: the calls are what keeps the kit small.
 */
#ifndef HALFLSB_BYTES_H
#define HALFLSB_BYTES_H

#include <stdint.h>

uint16_t halflsb_get16(const uint8_t* p);
uint32_t halflsb_get32(const uint8_t* p);
uint8_t* halflsb_put8(uint8_t* p, unsigned value);
uint8_t* halflsb_put16(uint8_t* p, unsigned value);
uint8_t* halflsb_put32(uint8_t* p, uint32_t value);

#endif
