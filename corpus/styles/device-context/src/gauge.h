#pragma once
#include <stdint.h>

struct gauge_type {
    uint8_t bits;
    uint8_t input;
    uint8_t times;
};

struct gauge {
    const struct gauge_type *type;
    uint16_t reference_mv;
    uint32_t millivolts;
};

void gauge_init(struct gauge *self, uint16_t reference_mv);
void gauge_update(struct gauge *self);
