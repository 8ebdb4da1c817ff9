#include <stdint.h>
#include "bridge.h"

/* three people, three ways to extend 12 bits to the machine's word */

int32_t bridge_a_uv(void)
{
    int32_t c = BRIDGE_A & 0x0FFF;

    if (c & 0x0800)
        c -= 0x1000;
    return c * 1000;
}

int32_t bridge_b_uv(void)
{
    int16_t c = (int16_t)(BRIDGE_B << 4);

    return (c >> 4) * 1000L;
}

int32_t bridge_c_uv(void)
{
    int32_t c = (BRIDGE_C & 0xFFF) ^ 0x800;

    c = c - 0x800;
    return c * 1000;
}
