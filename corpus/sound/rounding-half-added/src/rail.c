#include <stdint.h>
#include "adc.h"

#define RAIL_CH     3
#define SPAN_MV     24500L      /* 5 V times 4.9 */
#define COUNTS      1024L

uint16_t rail_mv;

void rail_update(void)
{
    uint16_t raw = adc_read(RAIL_CH);

    rail_mv = (uint16_t)((raw * SPAN_MV + COUNTS / 2) / COUNTS);
}
