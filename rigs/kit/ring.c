/* SPDX-License-Identifier: 0BSD */
#include "ring.h"

/* One struct, so that its members share a base address. volatile also keeps the store of a byte before the store
 * of the index that publishes it. */
static struct {
    volatile halflsb_ring_index newest; /* owner: the interrupt */
    volatile halflsb_ring_index oldest; /* owner: the main loop */
    volatile uint32_t bytes_lost;       /* owner: the interrupt */
    halflsb_ring_index looked;          /* up to here there is no delimiter */
    uint8_t beginning_lost;
    volatile uint8_t bytes[HALFLSB_RING_BYTES];
} ring;

halflsb_ring_index halflsb_ring_after(halflsb_ring_index index) {
    return index == HALFLSB_RING_BYTES - 1 ? (halflsb_ring_index)0 : (halflsb_ring_index)(index + 1u);
}

void halflsb_receive_overrun(void) { ring.bytes_lost = ring.bytes_lost + 1u; }

void halflsb_receive_byte(uint8_t byte) {
    const halflsb_ring_index here = ring.newest;
    const halflsb_ring_index next = halflsb_ring_after(here);
    if (next == ring.oldest) {
        halflsb_receive_overrun();
        return;
    }
    ring.bytes[here] = byte;
    ring.newest = next;
}

void halflsb_ring_clear(void) {
    ring.newest = ring.oldest = ring.looked = 0;
    ring.bytes_lost = 0;
    ring.beginning_lost = 0;
}

int halflsb_ring_find_delimiter(halflsb_ring_index* delimiter) {
    const halflsb_ring_index end = ring.newest;
    while (ring.looked != end) {
        if (ring.bytes[ring.looked] == 0) {
            *delimiter = ring.looked;
            return 1;
        }
        ring.looked = halflsb_ring_after(ring.looked);
    }
    if (halflsb_ring_after(end) == ring.oldest) {
        ring.oldest = end;
        ring.beginning_lost = 1;
    }
    return 0;
}

int halflsb_ring_beginning_is_lost(void) { return ring.beginning_lost; }

void halflsb_ring_release(halflsb_ring_index delimiter) {
    ring.beginning_lost = 0;
    ring.looked = ring.oldest = halflsb_ring_after(delimiter);
}

halflsb_ring_index halflsb_ring_oldest(void) { return ring.oldest; }

uint8_t halflsb_ring_at(halflsb_ring_index index) { return ring.bytes[index]; }

uint32_t halflsb_ring_bytes_lost(void) { return ring.bytes_lost; }
