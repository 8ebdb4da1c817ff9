#include <stdint.h>
#include "adc.h"

#define R1  22000.0f
#define R2  4700.0f

float bus_volts(void)
{
    float v;

    v = adc_sample(ADC_BUS) * 3.3f / 4096.0f;
    v = v * (R1 + R2) / R2;
    return v;
}
