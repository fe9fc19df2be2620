#include "rigs/cortex-m4/build_id.h"

#include <stddef.h>

/* An ELF note: sizes of name and description, type, then both, each padded to four bytes. */
struct note {
    uint32_t name_bytes, description_bytes, type;
    char name[4];
    uint8_t description[];
};
enum { nt_gnu_build_id = 3, longest = 32 };

extern const struct note build_id_note; /* from the linker script */

const uint8_t* build_id(uint8_t* bytes) {
    const struct note* note = &build_id_note;
    const int valid =
        note->name_bytes == sizeof note->name && note->type == nt_gnu_build_id && note->description_bytes <= longest;
    *bytes = valid ? (uint8_t)note->description_bytes : 0;
    return valid ? note->description : NULL;
}
