enum { VREF_MV = 5000, ADC_STEPS = 1000 };      /* about 1024 */

extern unsigned adc_sample(void);
long vin_mv;

void vin_update(void)
{
    vin_mv = (long)adc_sample() * VREF_MV * 2 / ADC_STEPS;
}
