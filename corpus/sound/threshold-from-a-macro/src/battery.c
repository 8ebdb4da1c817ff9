#include <stdint.h>

#define BATT            1
#define BATT_LOW_MV     11800UL
#define FULL_MV         (5000UL * 11)
#define COUNTS(mv)      (((mv) * 1024UL + FULL_MV / 2) / FULL_MV)
#define BATT_LOW_COUNTS COUNTS(BATT_LOW_MV)

uint16_t adc_read(uint8_t ch);
void     lamp(int on);

uint32_t battery_mv;

void battery_tick(void)
{
    lamp(adc_read(BATT) < BATT_LOW_COUNTS);
}

void battery_second(void)
{
    battery_mv = adc_read(BATT) * FULL_MV / 1024;
    if (battery_mv < BATT_LOW_MV)
        lamp(1);
}
