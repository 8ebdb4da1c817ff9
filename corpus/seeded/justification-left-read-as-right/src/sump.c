#include <stdint.h>
#include "part.h"

uint32_t sump_mv;

void adc_done(void)
{
    sump_mv = (uint32_t)(uint16_t)ADC0->RES * 6000u / 4096u;
}
