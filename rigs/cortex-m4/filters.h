/* The filters of the CW-7, as its greeting lists them. */
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
extern const struct halflsb_filter cw7_filters[cw7_filter_count];

#endif
