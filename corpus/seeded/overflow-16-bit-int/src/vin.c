#include <stdint.h>

int adc_read(uint8_t ch);

int16_t vin_mv(void)
{
    return adc_read(2) * 5000 / 1024 * 2;
}
