/* The wide variant of the CW-7: two load cells, and converters of 12 and 24 bits. Its filters as its greeting lists
 * them. */
#ifndef CW7_WIDE_FILTERS_H
#define CW7_WIDE_FILTERS_H

enum { cw7_pair, cw7_level, cw7_average_u12_left, cw7_average_i24, cw7_wide_filter_count };

#endif
