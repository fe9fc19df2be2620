#include "rigs/cortex-m4/uart.h"

#include "rigs/cortex-m4/registers.h"

static const struct uart_receiver* receiver_;
volatile uint32_t uart_bytes_received;

void uart_start(uint32_t baud, const struct uart_receiver* receiver) {
    receiver_ = receiver;
    RCC_AHB1ENR |= RCC_AHB1ENR_GPIOA;
    RCC_APB2ENR |= RCC_APB2ENR_USART1;
    GPIOA_MODER = (GPIOA_MODER & ~(0xFu << 18)) | 0xAu << 18; /* pins 9 and 10: alternate function */
    GPIOA_AFRH = (GPIOA_AFRH & ~(0xFFu << 4)) | 0x77u << 4;
    USART1_BRR = (BUS_HZ + baud / 2u) / baud; /* 16 times oversampling: the divider in sixteenths */
    USART1_CR1 = USART_CR1_UE | USART_CR1_TE | USART_CR1_RE | USART_CR1_RXNEIE;
    NVIC_ISER(USART1_IRQ / 32u) = 1u << USART1_IRQ % 32u;
}

void uart_write(const uint8_t* bytes, size_t count) {
    /* Not by interrupt: the emulator's model of this UART never raises the one for an empty transmitter. */
    for (size_t i = 0; i < count; i++) {
        while (!(USART1_SR & USART_SR_TXE)) {
        }
        USART1_DR = bytes[i];
    }
}

void uart_interrupt(void) {
    const uint32_t status = USART1_SR;
    if (!(status & (USART_SR_RXNE | USART_SR_ORE))) return;
    const uint8_t byte = (uint8_t)USART1_DR; /* reading it after the status clears both flags */
    if (status & USART_SR_RXNE) {
        receiver_->byte(byte);
        uart_bytes_received++;
    }
    if (status & USART_SR_ORE) receiver_->overrun();
}
