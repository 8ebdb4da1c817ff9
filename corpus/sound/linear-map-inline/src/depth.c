#include <stdint.h>

uint16_t adc_read(uint8_t ch);

static int32_t map(int32_t x, int32_t in_lo, int32_t in_hi, int32_t out_lo, int32_t out_hi)
{
    return (x - in_lo) * (out_hi - out_lo) / (in_hi - in_lo) + out_lo;
}

int16_t depth_x10(void)
{
    return (int16_t)map(adc_read(2), 819, 4096, 0, 1000);
}
