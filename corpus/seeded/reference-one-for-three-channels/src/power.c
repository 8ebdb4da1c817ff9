#include <stdint.h>

#define VREF_MV         3300u
#define PIN_MV(n, ratio) ((uint32_t)adc_buf[n] * VREF_MV * (ratio) / 4096u)

volatile uint16_t adc_buf[3];

struct {
    uint32_t battery, rail, logic;
} power;

void power_sample(void)
{
    power.battery = PIN_MV(0, 11);
    power.rail = PIN_MV(1, 6);
    power.logic = PIN_MV(2, 2);
}
