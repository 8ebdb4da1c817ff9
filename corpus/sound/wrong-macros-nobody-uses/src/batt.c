#include "batt.h"

#if 0
uint32_t batt_mv(void)
{
    return adc_code(ADC_BATT) * VREF_MV_OLD / ADC_MAX * BATT_RATIO_PROTO;   /* not this */
}
#endif

static uint32_t old_scale(uint16_t raw)
{
    return (uint32_t)raw * VREF_MV_OLD * BATT_RATIO_PROTO / ADC_MAX;
}

uint32_t batt_mv(void)
{
    return (uint32_t)adc_code(ADC_BATT) * (VREF_MV * BATT_RATIO) / ADC_STEPS;
}
