/* The bench variant of the CW-7 whose filters change the sample rate, as its greeting lists them. */
#ifndef CW7_RATE_FILTERS_H
#define CW7_RATE_FILTERS_H

enum { cw7_belt_eighth, cw7_belt_fourfold, cw7_belt_quarter, cw7_belt_triple, cw7_belt_slow, cw7_rate_filter_count };

#endif
