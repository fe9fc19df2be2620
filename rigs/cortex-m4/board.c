/* The checkweigher CW-7: its filters behind the kit, the kit on USART1. */
#include <string.h>

#include "rigs/cortex-m4/build_id.h"
#include "rigs/cortex-m4/defects/defect.h"
#include "rigs/cortex-m4/filters.h"
#include "rigs/cortex-m4/startup.h"
#include "rigs/cortex-m4/timer.h"
#include "rigs/cortex-m4/uart.h"
#include "rigs/kit/halflsb_kit.h"

static struct halflsb_filter filters[CW7_MOST_FILTERS];

static struct halflsb_board board = {
    .serial = "CW7-0042",
    .filters = filters,
    .tick_hz = TICK_HZ,
    .tick_bits = timer_bits,
    .ticks = timer_ticks,
    .write = uart_write,
};

static const struct uart_receiver receiver = {halflsb_receive_byte, halflsb_receive_overrun};

int main(void) {
    memcpy(filters, cw7_offer.filters, cw7_offer.count * sizeof *filters);
    board.filter_count = cw7_offer.count;
    install_defect(filters);
    board.build_id = build_id(&board.build_id_bytes);
    timer_start();
    halflsb_start(&board);
    uart_start(LINE_BAUD, &receiver);
    for (;;) {
        const uint32_t seen = uart_bytes_received;
        if (!halflsb_poll()) wait_for_interrupt_if_unchanged(&uart_bytes_received, seen);
    }
}
