/* TIM2 as a free-running 32-bit counter at the timer clock. */
#ifndef CW7_TIMER_H
#define CW7_TIMER_H

#include <stdint.h>

enum { timer_bits = 32 };

void timer_start(void);
uint32_t timer_ticks(void);

#endif
