#include <stdint.h>

#define RAIL24_RATIO    4.9f

uint16_t adc_read(uint8_t ch);

float rail24_volts(void)
{
    return adc_read(3) * 5.0f / 1024.0f * RAIL24_RATIO;
}
