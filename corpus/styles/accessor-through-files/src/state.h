#pragma once
#include <stdint.h>
struct state {
    uint16_t aerator_ma;
    uint16_t ticks;
};
extern struct state state;
