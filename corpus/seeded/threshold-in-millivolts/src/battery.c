#include <stdint.h>
#include <stdbool.h>

enum { BATT_LOW_MV = 10800 };

uint16_t adc_read(uint8_t ch);
uint32_t battery_mv;

void battery_update(void)
{
    battery_mv = adc_read(2) * 36300u / 4096u;
}

bool battery_low(void)
{
    return battery_mv < BATT_LOW_MV;
}
