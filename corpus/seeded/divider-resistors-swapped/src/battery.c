#include <stdint.h>

#define R_TOP_OHM       10000.0f
#define R_BOTTOM_OHM    100000.0f

enum { BATT = 4 };
uint16_t adc_code(int which);

float battery_volts(void)
{
    return adc_code(BATT) * 3.3f / 4096.0f * (R_TOP_OHM + R_BOTTOM_OHM) / R_BOTTOM_OHM;
}
