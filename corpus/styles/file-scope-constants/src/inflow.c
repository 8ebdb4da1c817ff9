#include <stdint.h>

extern uint16_t adc_in(uint8_t which);

static const float   ref_volts = 5.0f;
const uint16_t       adc_steps = 1024;
static const float   zero_volts = 0.5f, volts_per_kpa = 0.02f;

float inflow_kpa(void)
{
    const float v = ref_volts * adc_in(4) / adc_steps;

    return (v - zero_volts) / volts_per_kpa;
}
