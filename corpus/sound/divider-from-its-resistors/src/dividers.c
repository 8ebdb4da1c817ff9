#include <stdint.h>

#define VREF_MV     5000

#define R1          39.0f
#define R2          10.0f
#define RAIL_RATIO  ((R1 + R2) / R2)

volatile uint16_t adc_feeder, adc_rail;

int32_t feeder_mv(void)
{
    return (int32_t)adc_feeder * VREF_MV * ((100 + 10) / 10) / 1024;
}

float rail_volts(void)
{
    return adc_rail * (VREF_MV / 1000.0f) / 1024 * RAIL_RATIO;
}
