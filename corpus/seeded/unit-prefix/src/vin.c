#include <stdint.h>

#define VREF_UV     3300000ull
#define UV_PER_MV   100u

extern volatile uint16_t adc_value;

uint32_t vin_mv(void)
{
    uint64_t uv = adc_value * VREF_UV / 4096u;

    return (uint32_t)(uv * 2u / UV_PER_MV);
}
