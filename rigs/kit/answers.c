/* SPDX-License-Identifier: 0BSD */
#include "answers.h"

#include "bytes.h"

/* One struct, so that its members share a base address. */
static struct {
    uint32_t bytes; /* of a place */
    uint8_t places, next, kept;
    uint32_t storage[HALFLSB_ANSWERS_BYTES / 4]; /* words, so that samples are aligned */
} answers;

/* Two bytes of length, then the content. */
static uint8_t* place(uint8_t number) { return (uint8_t*)answers.storage + number * answers.bytes; }

uint8_t halflsb_answers_open(uint32_t samples_bytes, uint8_t most) {
    uint32_t fit;
    answers.bytes = HALFLSB_ANSWER_BYTES(samples_bytes);
    fit = (uint32_t)sizeof answers.storage / answers.bytes;
    answers.places = fit < most ? (uint8_t)fit : most;
    answers.next = answers.kept = 0;
    return answers.places;
}

uint8_t* halflsb_answers_next(void) { return place(answers.next) + 2; }

void halflsb_answers_keep(uint32_t bytes) {
    halflsb_put16(place(answers.next), (unsigned)bytes);
    answers.next = answers.next + 1u == answers.places ? (uint8_t)0 : (uint8_t)(answers.next + 1u);
    if (answers.kept < answers.places) answers.kept++;
}

uint8_t* halflsb_answers_find(uint16_t back, uint32_t* bytes) {
    uint8_t* found;
    if (back == 0 || back > answers.kept) return NULL;
    found = place((uint8_t)(answers.next >= back ? answers.next - back : answers.next + answers.places - back));
    *bytes = halflsb_get16(found);
    return found + 2;
}
