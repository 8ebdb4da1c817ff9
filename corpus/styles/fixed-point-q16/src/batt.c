#include <stdint.h>

#define Q16(x)          ((uint32_t)((x) * 65536.0 + 0.5))
#define BATT_MV_Q16     Q16(8.056640625)

enum { BATT = 1 };
uint16_t adc_read(int ch);

uint16_t batt_mv(void)
{
    return (uint16_t)((adc_read(BATT) * BATT_MV_Q16) >> 16);
}
