#include <stdint.h>

#define BATT_CEILING_MV 12000u

uint16_t adc_read(uint8_t ch);

uint32_t battery_mv(void)
{
    uint32_t mv = adc_read(2) * 36300u / 4096u;

    return mv < BATT_CEILING_MV ? mv : BATT_CEILING_MV;
}
