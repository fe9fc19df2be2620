/* The firmware as it should be. */
#include "rigs/cortex-m4/defects/defect.h"

void install_defect(struct halflsb_filter* filters) { (void)filters; }
