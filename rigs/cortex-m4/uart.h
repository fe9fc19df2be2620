/* USART1, 8N1: receives by interrupt, transmits by polling. */
#ifndef CW7_UART_H
#define CW7_UART_H

#include <stddef.h>
#include <stdint.h>

/* Called from the interrupt. */
struct uart_receiver {
    void (*byte)(uint8_t byte);
    void (*overrun)(void);
};

void uart_start(uint32_t baud, const struct uart_receiver* receiver);
/* Returns when the last byte is in the transmitter. */
void uart_write(const uint8_t* bytes, size_t count);
/* Advances with each byte received. */
extern volatile uint32_t uart_bytes_received;

void uart_interrupt(void); /* in the vector table */

#endif
