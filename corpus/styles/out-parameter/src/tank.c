#include <stdint.h>
#include "adc.h"

#define SHUNT_OHM   150

int32_t tank_level_mm;

void tank_task(void)
{
    uint16_t raw;
    int32_t  ua;

    if (adc_get(TANK, &raw) != ADC_OK)
        return;
    ua = (int32_t)((uint32_t)raw * 33000u / 4096u * 100u / SHUNT_OHM);
    tank_level_mm = (ua - 4000) / 8;
}
