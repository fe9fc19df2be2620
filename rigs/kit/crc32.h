/* SPDX-License-Identifier: 0BSD
 *
 * CRC-32/ISO-HDLC: polynomial 0x04C11DB7 reflected, start and final XOR 0xFFFFFFFF; "123456789" gives
 * 0xCBF43926. A register that has also taken the four CRC bytes holds HALFLSB_CRC_RESIDUE, so a receiver
 * need not know where the content ends.
 */
#ifndef HALFLSB_CRC32_H
#define HALFLSB_CRC32_H

#include <stddef.h>
#include <stdint.h>

#define HALFLSB_CRC_START 0xFFFFFFFFu
#define HALFLSB_CRC_RESIDUE 0xDEBB20E3u

uint32_t halflsb_crc_add(uint32_t crc, uint8_t byte);
/* The register over all bytes, from the start value, with the final XOR. */
uint32_t halflsb_crc_of(const uint8_t* bytes, size_t count);

#endif
