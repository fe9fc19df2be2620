#include "rigs/cortex-m4/timer.h"

#include "rigs/cortex-m4/registers.h"

void timer_start(void) {
    RCC_APB1ENR |= RCC_APB1ENR_TIM2;
    TIM2_PSC = 0;
    TIM2_ARR = 0xFFFFFFFFu;
    TIM2_EGR = TIM_EGR_UG; /* takes the prescaler over */
    TIM2_CR1 = TIM_CR1_CEN;
}

uint32_t timer_ticks(void) { return TIM2_CNT; }
