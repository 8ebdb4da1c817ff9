#include <stdint.h>
#include "chip.h"

static uint16_t adc_pair(void)
{
    uint8_t low = ADCL;
    uint8_t high = ADCH;

    return (uint16_t)high << 8 | low;
}

uint16_t rail_mv(void)
{
    return adc_pair() * 15u;
}
