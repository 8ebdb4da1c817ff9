#include <stdint.h>
#include "adc.h"

uint32_t battery_mv(void)
{
    return (uint32_t)adc_read(1) * VDDA_MV * BATT_RATIO / ADC_FULL;
}
