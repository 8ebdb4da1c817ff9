#include <stdint.h>

#define VREF_MV 3000u
#define STEPS   4096u

uint16_t adc_read(uint8_t ch);

uint32_t battery_mv(void)
{
    return adc_read(2) * VREF_MV * 11u / STEPS;
}
