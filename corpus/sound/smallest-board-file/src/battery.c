#include <stdint.h>

#define BATT    2

uint16_t adc_read(uint8_t ch);

uint32_t battery_mv;
uint16_t battery_raw;

void battery_task(void)
{
    uint16_t raw = adc_read(BATT);

    battery_raw = raw;
    battery_mv = raw * 3300u * 11u / 4096u;
}
