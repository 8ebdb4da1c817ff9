#include <stdint.h>

#define DRUM_INPUT 5

uint16_t adc_take(uint8_t input);

int16_t drum_ma;

static int16_t milliamps(int16_t counts)
{
    return (int16_t)((int32_t)counts * 50000L / 66 * 100 / 1024);
}

void drum_update(void)
{
    drum_ma = milliamps((int16_t)(adc_take(DRUM_INPUT) - 512u));
}
