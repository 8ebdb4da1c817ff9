#include <stdint.h>

enum { IN_BATT = 2, IN_RAIL = 5 };

uint16_t adc_read(int input);

uint32_t batt_mv;
uint32_t rail_mv;

void power_update(void)
{
    batt_mv = adc_read(IN_BATT) * 9900u / 4096u;
    rail_mv = adc_read(IN_BATT) * 6600u / 4096u;
}
