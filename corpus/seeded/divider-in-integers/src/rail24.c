#include <stdint.h>

#define R1      39
#define R2      10

uint16_t adc_read(uint8_t ch);

uint32_t rail24_mv(void)
{
    return adc_read(3) * 5000ul * ((R1 + R2) / R2) / 1024;
}
