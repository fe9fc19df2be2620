#include "rigs/cortex-m4/wide_filters.h"

#include "rigs/cortex-m4/filters.h"
#include "rigs/filters/moving_average.h"
#include "rigs/filters/moving_average_offset.h"
#include "rigs/filters/one_pole.h"

enum { points = 16, level_shift = 4, cells = 2 };

/* A load cell at each end of the belt, left and right: the same average, each with a state of its own. */
static struct moving_average_q15 pair[cells];
static int16_t pair_rings[cells][points];
static void pair_reset(void) {
    for (unsigned cell = 0; cell < cells; cell++) moving_average_q15_init(&pair[cell], pair_rings[cell], points);
}
static void pair_process(const void* in, void* out, uint16_t count) {
    const int16_t* x = in;
    int16_t* y = out;
    for (unsigned n = 0; n < count; n++)
        for (unsigned cell = 0; cell < cells; cell++) moving_average_q15_process(&pair[cell], x++, y++, 1);
}

static struct one_pole_q15 level;
static void level_reset(void) { one_pole_q15_init(&level, level_shift); }
static void level_process(const void* in, void* out, uint16_t count) { one_pole_q15_process(&level, in, out, count); }

static struct moving_average_q15 narrow;
static int16_t narrow_ring[points];
static void narrow_reset(void) { moving_average_q15_init(&narrow, narrow_ring, points); }
static void narrow_process(const void* in, void* out, uint16_t count) {
    moving_average_u12_left_process(&narrow, in, out, count);
}

static struct moving_average_i32 wide;
static int32_t wide_ring[points];
static void wide_reset(void) { moving_average_i32_init(&wide, wide_ring, points); }
static void wide_process(const void* in, void* out, uint16_t count) {
    moving_average_i32_process(&wide, in, out, count);
}

#define CALL(name, format, channels, function) \
    { name, HALFLSB_CALL, format, format, channels, channels, 0, function##_reset, function##_process, NULL }

static const struct halflsb_filter filters[cw7_wide_filter_count] = {
    [cw7_pair] = CALL("pair", HALFLSB_Q15, cells, pair),
    [cw7_level] = CALL("level", HALFLSB_Q15, 1, level),
    [cw7_average_u12_left] = CALL("average-u12-left", HALFLSB_U12 | HALFLSB_LEFT, 1, narrow),
    [cw7_average_i24] = CALL("average-i24", HALFLSB_I24, 1, wide),
};
const struct cw7_offer cw7_offer = {filters, cw7_wide_filter_count};
