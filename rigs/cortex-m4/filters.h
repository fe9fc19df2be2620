/* The filters of the CW-7, as its greeting lists them, and what an image offers: these, or those of another file that
 * defines cw7_offer (wide_filters.c, exact_filters.c). An image links exactly one. */
#ifndef CW7_FILTERS_H
#define CW7_FILTERS_H

#include "rigs/kit/halflsb_kit.h"

enum {
    cw7_load_cell,
    cw7_smoothing,
    cw7_quick_smoothing,
    cw7_mains_notch,
    cw7_settle,
    cw7_settle_q31,
    cw7_filter_count
};

struct cw7_offer {
    const struct halflsb_filter* filters;
    uint8_t count; /* up to CW7_MOST_FILTERS */
};
#ifndef CW7_MOST_FILTERS
#define CW7_MOST_FILTERS 6
#endif
extern const struct cw7_offer cw7_offer;

#endif
