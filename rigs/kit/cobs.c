/* SPDX-License-Identifier: 0BSD */
#include "cobs.h"

void halflsb_cobs_encode(const uint8_t* content, size_t count, void (*write)(const uint8_t* bytes, size_t count)) {
    for (;;) {
        size_t run = 0;
        uint8_t code;
        while (run < count && run < 254 && content[run] != 0) run++;
        code = (uint8_t)(run + 1);
        write(&code, 1);
        if (run > 0) write(content, run);
        count -= run;
        if (count == 0) return;
        content += run;
        if (run < 254) { /* the group stands for the zero that ended it */
            content++;
            count--;
        }
    }
}
