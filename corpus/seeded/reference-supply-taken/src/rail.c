#include <stdint.h>
#include "config.h"

extern volatile uint16_t adc_buf[4];

uint32_t rail_mv(void)
{
    uint32_t mv = adc_buf[RAIL];

    mv *= VREF_MV * 6u;
    mv >>= 12;
    return mv;
}
