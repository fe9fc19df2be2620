/* SPDX-License-Identifier: 0BSD */
#include "frame.h"

#include "bytes.h"
#include "cobs.h"
#include "crc32.h"

static int is_whole(struct halflsb_frame* frame) {
    struct halflsb_cobs_decoder decoder = {0, 0};
    uint32_t crc = HALFLSB_CRC_START, count = 0;
    halflsb_ring_index at;
    for (at = frame->first; at != frame->delimiter; at = halflsb_ring_after(at)) {
        const int byte = halflsb_cobs_decode(&decoder, halflsb_ring_at(at));
        if (byte < 0) continue;
        crc = halflsb_crc_add(crc, (uint8_t)byte);
        if (count < HALFLSB_HEAD_BYTES) frame->head[count] = (uint8_t)byte;
        count++;
    }
    if (decoder.left != 0 || count < 1 + HALFLSB_CRC_BYTES || crc != HALFLSB_CRC_RESIDUE) return 0;
    frame->bytes = count - HALFLSB_CRC_BYTES;
    return 1;
}

enum halflsb_arrival halflsb_frame_receive(struct halflsb_frame* frame) {
    while (halflsb_ring_find_delimiter(&frame->delimiter)) {
        const int beginning_is_lost = halflsb_ring_beginning_is_lost();
        frame->first = halflsb_ring_oldest();
        if (frame->first == frame->delimiter && !beginning_is_lost) {
            halflsb_ring_release(frame->delimiter); /* a lone delimiter */
            continue;
        }
        if (!beginning_is_lost && is_whole(frame)) return HALFLSB_WHOLE;
        halflsb_ring_release(frame->delimiter);
        return HALFLSB_BROKEN;
    }
    return HALFLSB_NOTHING;
}

void halflsb_frame_copy(const struct halflsb_frame* frame, uint32_t offset, uint8_t* to) {
    struct halflsb_cobs_decoder decoder = {0, 0};
    uint32_t count = 0;
    halflsb_ring_index at;
    for (at = frame->first; count < frame->bytes; at = halflsb_ring_after(at)) {
        const int byte = halflsb_cobs_decode(&decoder, halflsb_ring_at(at));
        if (byte < 0) continue;
        if (count >= offset) *to++ = (uint8_t)byte;
        count++;
    }
}

void halflsb_frame_release(const struct halflsb_frame* frame) { halflsb_ring_release(frame->delimiter); }

uint32_t halflsb_put_refused(uint8_t* to, const struct halflsb_frame* frame, uint8_t reason) {
    to[0] = 0xFF;
    to[1] = frame->head[0];
    to[2] = frame->bytes > 2 ? frame->head[1] : (uint8_t)0;
    to[3] = frame->bytes > 2 ? frame->head[2] : (uint8_t)0;
    to[4] = reason;
    return 5;
}

void halflsb_frame_send(uint8_t* content, size_t bytes, void (*write)(const uint8_t* bytes, size_t count)) {
    static const uint8_t delimiter = 0;
    halflsb_put32(content + bytes, halflsb_crc_of(content, bytes));
    halflsb_cobs_encode(content, bytes + HALFLSB_CRC_BYTES, write);
    write(&delimiter, 1);
}
