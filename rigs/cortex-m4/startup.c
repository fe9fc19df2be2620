/* From reset to main(): the vector table, and C's promise that variables hold their initial values. */
#include "rigs/cortex-m4/startup.h"

#include <stdint.h>

#include "rigs/cortex-m4/registers.h"
#include "rigs/cortex-m4/uart.h"

extern uint32_t stack_top, data_load, data_begin, data_end, bss_begin, bss_end; /* from the linker script */

int main(void);
void reset_handler(void);

/* A fault, or an interrupt that nobody enabled: start again. The host notices, because a board that was
 * restarted has no stream open; a board that hangs would only be silent. */
static void restart(void) {
    SCB_AIRCR = SCB_AIRCR_RESET;
    for (;;) {
    }
}

void reset_handler(void) {
    const uint32_t* from = &data_load;
    for (uint32_t* to = &data_begin; to < &data_end;) *to++ = *from++;
    for (uint32_t* to = &bss_begin; to < &bss_end;) *to++ = 0;
    main();
    restart();
}

/* RM0090, table of vectors: 15 exceptions of the processor, then 82 interrupts of the chip. */
enum { first_interrupt = 15, vector_count = first_interrupt + 82, uart = first_interrupt + USART1_IRQ };

__attribute__((section(".vectors"), used)) static const struct {
    const void* initial_stack;
    void (*handler[vector_count])(void);
} vectors = {
    .initial_stack = &stack_top,
    .handler =
        {
            [0] = reset_handler,
            [1 ... uart - 1] = restart,
            [uart] = uart_interrupt,
            [uart + 1 ... vector_count - 1] = restart,
        },
};

void wait_for_interrupt_if_unchanged(const volatile uint32_t* counter, uint32_t seen) {
    /* Between looking and sleeping the interrupt could come and be slept through. With interrupts masked
     * a pending one still ends WFI, and is taken when they are let in again. */
    __asm volatile("cpsid i" ::: "memory");
    if (*counter == seen) __asm volatile("wfi" ::: "memory");
    __asm volatile("cpsie i" ::: "memory");
}
