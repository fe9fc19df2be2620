/* The GNU build-id of the running image. */
#ifndef CW7_BUILD_ID_H
#define CW7_BUILD_ID_H

#include <stdint.h>

/* NULL and 0 when the note is missing or not one. */
const uint8_t* build_id(uint8_t* bytes);

#endif
