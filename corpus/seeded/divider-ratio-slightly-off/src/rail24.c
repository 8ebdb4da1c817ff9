#include <stdint.h>

uint16_t adc_read(uint8_t ch);

static const float rail24_ratio = 4.95f;

float rail24_volts(void)
{
    float pin = (float)adc_read(3) * 5.0f / 1024.0f;

    return pin * rail24_ratio;
}
