/* SPDX-License-Identifier: 0BSD
 *
 * The board's side of the framed wire (docs/wire.md), in C99: no heap, no stdio, no library calls but
 * memcpy, memmove, memset. The firmware supplies: bytes out, a tick counter, its filters. It calls
 * halflsb_receive_byte() from its receive interrupt and halflsb_poll() from its main loop.
 *
 * Not reentrant: one kit instance, one receive interrupt, one main loop.
 */
#ifndef HALFLSB_KIT_H
#define HALFLSB_KIT_H

#include <stddef.h>
#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

/* The firmware sets these on the compiler's command line when the defaults do not suit. */
#ifndef HALFLSB_BLOCK_SAMPLES
#define HALFLSB_BLOCK_SAMPLES 64 /* largest block, 1 .. 4096 */
#endif
#ifndef HALFLSB_CREDIT_BLOCKS
#define HALFLSB_CREDIT_BLOCKS 4 /* blocks in flight, 1 .. 64 */
#endif
#ifndef HALFLSB_WORD_BYTES
#define HALFLSB_WORD_BYTES 4 /* widest sample in its container, times the channels of one instant, 1 .. 16 */
#endif
#ifndef HALFLSB_RATES
#define HALFLSB_RATES 0 /* 1: some filter changes the sample rate */
#endif

enum halflsb_injection { HALFLSB_CALL = 0, HALFLSB_BUFFER = 1, HALFLSB_CONVERTER = 2 };

/* A sample's format is a number, to which a layout may be added: HALFLSB_I24 | HALFLSB_LEFT | HALFLSB_BIG.
 *
 *   q7 i8 u8       1 byte
 *   q15 i16 u16    2 bytes
 *   u12            2 bytes, in the low 12 bits; with HALFLSB_LEFT in the high 12, zeros below
 *   i24            4 bytes, sign-extended; with HALFLSB_LEFT in the high 24 bits, zeros below; with
 *                  HALFLSB_PACKED 3 bytes and no padding between samples
 *   q31 i32 f32    4 bytes
 *
 * u formats are offset binary: the mid-code (128, 2048, 32768) is zero. No other format takes HALFLSB_LEFT or
 * HALFLSB_PACKED: START refuses such a filter (reason 6). */
enum halflsb_format {
    HALFLSB_Q15 = 1,
    HALFLSB_Q31 = 2,
    HALFLSB_I16 = 3,
    HALFLSB_I32 = 4,
    HALFLSB_F32 = 5,
    HALFLSB_Q7 = 6,
    HALFLSB_I8 = 7,
    HALFLSB_I24 = 8,
    HALFLSB_U8 = 9,
    HALFLSB_U12 = 10,
    HALFLSB_U16 = 11
};
#define HALFLSB_LEFT (1 << 5)
#define HALFLSB_PACKED (2 << 5)
#define HALFLSB_BIG (1 << 7) /* the most significant byte first */

/* A filter of the firmware. `process` takes `count` instants from `in` and writes as many to `out`; samples of one
 * instant are adjacent, channel 0 first. in and out never overlap harmfully (out may equal in).
 *
 * Words are in the machine's own order and aligned to their size, so that `in` and `out` can be read as arrays. The kit
 * turns no byte of a format with HALFLSB_BIG, nor of a packed one: such words lie in memory as they travel, most
 * (or, packed without HALFLSB_BIG, least) significant byte first, as a DMA would have put them there.
 *
 * A filter that changes the sample rate (HALFLSB_RATES 1) says how: of `down` instants come `up`, the smallest numbers
 * after which the pattern begins anew (a decimator by 8: 1 and 8; by 2 and then up by 2: 2 and 2). In place of
 * `process` it has `process_rate`, which returns how many instants it wrote; `in` may lie in the same memory, so far
 * behind `out` that a filter which takes each input before it writes what came of it overwrites none. */
struct halflsb_filter {
    const char* name; /* to 24 bytes */
    uint8_t injection, input, output, channels_in, channels_out, tables;
    void (*reset)(void);
    void (*process)(const void* in, void* out, uint16_t count);
    /* writes `count` values at `offset` of a table; 0 when out of range. NULL when tables is 0. */
    int (*load)(uint8_t table, uint16_t offset, const int32_t* values, uint8_t count);
#if HALFLSB_RATES
    uint16_t up, down;                                                   /* 0: 1 */
    uint16_t (*process_rate)(const void* in, void* out, uint16_t count); /* NULL: the rate does not change */
#endif
};

struct halflsb_setting {
    const char* name; /* to 24 bytes */
    int32_t minimum, maximum;
    int32_t* value;
    void (*changed)(void); /* may be NULL */
};

struct halflsb_board {
    const uint8_t* build_id; /* NULL when the image has none */
    uint8_t build_id_bytes;
    const char* serial; /* to 24 bytes, "" when there is none */
    const struct halflsb_filter* filters;
    uint8_t filter_count;
    const struct halflsb_setting* settings;
    uint8_t setting_count;
    uint32_t tick_hz;
    uint8_t tick_bits; /* 0: there is no counter */
    uint32_t (*ticks)(void);
    /* sends all bytes, waiting as long as the line needs */
    void (*write)(const uint8_t* bytes, size_t count);
    /* Less than what was compiled in, for a board that wants to show a smaller one; 0: as compiled. */
    uint16_t block_samples;
    uint8_t credit_blocks;
};

void halflsb_start(const struct halflsb_board* board);
/* From the receive interrupt, once a byte. */
void halflsb_receive_byte(uint8_t byte);
/* From the receive interrupt when the hardware reports an overrun. */
void halflsb_receive_overrun(void);
/* Handles at most one frame; returns nonzero when it did, so that the main loop can sleep on zero. */
int halflsb_poll(void);

#ifdef __cplusplus
}
#endif

#endif
