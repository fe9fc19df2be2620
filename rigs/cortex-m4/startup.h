#ifndef CW7_STARTUP_H
#define CW7_STARTUP_H

#include <stdint.h>

/* Sleeps until an interrupt, unless `counter`, which an interrupt advances, already differs from `seen`. */
void wait_for_interrupt_if_unchanged(const volatile uint32_t* counter, uint32_t seen);

#endif
