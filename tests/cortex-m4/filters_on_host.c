/* The CW-7's filters, compiled for this machine: words from stdin through the named one to stdout. */
#include <stdio.h>
#include <string.h>

#include "rigs/cortex-m4/filters.h"

enum { block_samples = 100 };

int main(int argc, char** argv) {
    for (int i = 0; argc == 2 && i < cw7_offer.count; i++) {
        const struct halflsb_filter* filter = &cw7_offer.filters[i];
        const size_t word =
            filter->input == HALFLSB_Q31 || filter->input == HALFLSB_I24 || filter->input == HALFLSB_F32 ? 4 : 2;
        const size_t instant = word * filter->channels_in;
        int32_t in[2 * block_samples], out[2 * block_samples]; /* two channels of the wider word */
        size_t count;
        if (strcmp(filter->name, argv[1]) != 0) continue;
        filter->reset();
        while ((count = fread(in, instant, block_samples, stdin)) > 0) {
            filter->process(in, out, (uint16_t)count);
            if (fwrite(out, instant, count, stdout) != count) return 1;
        }
        return fflush(stdout) == 0 ? 0 : 1;
    }
    fprintf(stderr, "usage: filters_on_host FILTER <codes >codes\n");
    return 2;
}
