#include <stdint.h>

#define VDDA        3.3f
#define ADC_COUNTS  4096
#define PROBE_GAIN  11.0f
#define V_PER_KPA   0.004f

uint16_t adc_oxygen(void);

static inline float volts(uint16_t code)
{
    return (float)code * (VDDA / (float)ADC_COUNTS);
}

uint16_t oxygen_x100(void)
{
    float kpa = volts(adc_oxygen()) / PROBE_GAIN / V_PER_KPA;

    return (uint16_t)(kpa * 100.0f + 0.5f);
}
