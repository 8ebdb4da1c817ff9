#include <stdint.h>

#define GOOD    1

uint16_t adc_read(uint8_t ch);

uint32_t good_mv(void)
{
    return adc_read(GOOD) * 33000u / 4096u;
}
