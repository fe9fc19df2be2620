/* Returns every byte as it came: what the line itself can carry, to measure everything else against. */
#include <stdint.h>

#include "rigs/cortex-m4/startup.h"
#include "rigs/cortex-m4/uart.h"

enum { ring_bytes = 16384 }; /* more than a pseudo-terminal holds, so that nothing is lost while we transmit */
static uint8_t ring[ring_bytes];
static volatile uint32_t head;

static void keep(uint8_t byte) {
    ring[head % ring_bytes] = byte;
    head = head + 1u;
}
static void overrun(void) {}
static const struct uart_receiver receiver = {keep, overrun};

int main(void) {
    uint32_t tail = 0;
    uart_start(LINE_BAUD, &receiver);
    for (;;) {
        const uint32_t ready = head;
        if (tail == ready) wait_for_interrupt_if_unchanged(&head, ready);
        while (tail != ready) uart_write(&ring[tail++ % ring_bytes], 1);
    }
}
