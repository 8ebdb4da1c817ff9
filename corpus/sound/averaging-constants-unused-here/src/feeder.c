#include <stdint.h>
#include "config.h"

extern volatile uint16_t adc_last;      /* written by the converter's interrupt */

static uint8_t bar_fill;

uint32_t feeder_mv(void)
{
    return adc_last * (VREF_MV * 11u) / ADC_COUNTS;
}

void bar_step(void)
{
    if (++bar_fill >= SAMPLES)
        bar_fill = 0;
    bar_draw(bar_fill << SAMPLE_SHIFT);
}
