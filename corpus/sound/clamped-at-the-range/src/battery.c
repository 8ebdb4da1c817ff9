#include <stdint.h>

#define BATT_TOP_MV 16000u

unsigned adc_raw(unsigned ch);

struct { uint16_t mv; uint8_t fresh; } battery;

void battery_update(void)
{
    uint32_t mv = adc_raw(2) * 33000ul / 4096;

    if (mv > BATT_TOP_MV)
        mv = BATT_TOP_MV;
    battery.mv = mv;
    battery.fresh = 1;
}
