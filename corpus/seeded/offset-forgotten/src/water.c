#include <stdint.h>

enum { AIR, WATER };
uint16_t adc_read(int which);

int16_t water_x10;

void water_update(void)
{
    int32_t mv = (int32_t)adc_read(WATER) * 3300 / 4096;

    water_x10 = (int16_t)mv;        /* 10 mV per degree */
}
