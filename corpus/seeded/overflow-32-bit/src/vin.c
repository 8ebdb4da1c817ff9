#include <stdint.h>

#define VREF_UV     3300000u

extern volatile uint16_t adc_buf[2];

uint32_t vin_uv(void)
{
    return adc_buf[1] * VREF_UV / 4096u * 2u;
}
