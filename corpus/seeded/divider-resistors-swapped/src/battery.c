#include <stdint.h>

#define R_TOP       10.0f       /* k */
#define R_BOTTOM    100.0f      /* k */

enum { BATT = 4 };
uint16_t adc_code(int which);

float battery_volts(void)
{
    return adc_code(BATT) * 3.3f / 4096.0f * (R_TOP + R_BOTTOM) / R_BOTTOM;
}
