#include <stdint.h>
#include "analog.h"

uint16_t adc_read(uint8_t ch);

uint32_t battery_mv(void)
{
    return adc_read(2) * (AREF_MV * 11u) / STEPS;
}
