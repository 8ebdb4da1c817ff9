#include <stdint.h>
#include "../shared values/c++ safe.h"

uint16_t adc_read(uint8_t ch);

uint32_t good_mv(void)
{
    return adc_read(GOOD) * 33000u / STEPS;
}
