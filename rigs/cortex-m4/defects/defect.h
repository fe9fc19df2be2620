/* One mistake an image: each file of this folder but this one defines install_defect(), and an image links
 * exactly one of them. The filters themselves (rigs/filters) know nothing of it. */
#ifndef CW7_DEFECT_H
#define CW7_DEFECT_H

#include "rigs/cortex-m4/filters.h"

/* Changes what one of the board's filters does, before the first sample; indexed as in filters.h. */
void install_defect(struct halflsb_filter* filters);

#endif
