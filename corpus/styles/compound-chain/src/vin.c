#include <stdint.h>

uint16_t adc_get(uint8_t ch);
uint16_t vin_mv;

void vin_poll(void)
{
    uint32_t mv;

    mv = adc_get(1);
    mv *= 5000;
    mv /= 1024;
    mv <<= 1;
    vin_mv = mv;
}
