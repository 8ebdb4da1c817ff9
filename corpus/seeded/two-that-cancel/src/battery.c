#include <stdint.h>

#define VREF_MV         3300u
#define BATT_DIVIDER    10u

uint16_t adc_read(uint8_t ch);

uint32_t battery_mv(void)
{
    return adc_read(2) * VREF_MV * BATT_DIVIDER / 4096u;
}
