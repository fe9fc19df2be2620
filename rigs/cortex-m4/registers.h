/* The few registers of the STM32F405 that this firmware touches, from reference manual RM0090 and, for the
 * processor's own, the ARMv7-M architecture manual. */
#ifndef CW7_REGISTERS_H
#define CW7_REGISTERS_H

#include <stdint.h>

#define REGISTER(address) (*(volatile uint32_t*)(uintptr_t)(address))

/* Reset and clock control: after a reset the processor and all buses run from the 16 MHz internal oscillator. */
#define RCC_AHB1ENR REGISTER(0x40023830u)
#define RCC_AHB1ENR_GPIOA (1u << 0)
#define RCC_APB1ENR REGISTER(0x40023840u)
#define RCC_APB1ENR_TIM2 (1u << 0)
#define RCC_APB2ENR REGISTER(0x40023844u)
#define RCC_APB2ENR_USART1 (1u << 4)
#define BUS_HZ 16000000u

/* Port A: USART1 sends on pin 9 and receives on pin 10, alternate function 7. */
#define GPIOA_MODER REGISTER(0x40020000u)
#define GPIOA_AFRH REGISTER(0x40020024u)

#define USART1_SR REGISTER(0x40011000u)
#define USART_SR_ORE (1u << 3)
#define USART_SR_RXNE (1u << 5)
#define USART_SR_TXE (1u << 7)
#define USART1_DR REGISTER(0x40011004u)
#define USART1_BRR REGISTER(0x40011008u)
#define USART1_CR1 REGISTER(0x4001100Cu)
#define USART_CR1_RE (1u << 2)
#define USART_CR1_TE (1u << 3)
#define USART_CR1_RXNEIE (1u << 5)
#define USART_CR1_UE (1u << 13)

#define TIM2_CR1 REGISTER(0x40000000u)
#define TIM_CR1_CEN (1u << 0)
#define TIM2_EGR REGISTER(0x40000014u)
#define TIM_EGR_UG (1u << 0)
#define TIM2_CNT REGISTER(0x40000024u)
#define TIM2_PSC REGISTER(0x40000028u)
#define TIM2_ARR REGISTER(0x4000002Cu)

#define USART1_IRQ 37u
#define NVIC_ISER(number) REGISTER(0xE000E100u + 4u * (number))
#define SCB_AIRCR REGISTER(0xE000ED0Cu)
#define SCB_AIRCR_RESET 0x05FA0004u /* the key that makes the write count, and SYSRESETREQ */

#endif
