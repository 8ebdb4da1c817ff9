#include "pump.h"

struct drive pump;

static int32_t dmv_to_ma(uint32_t dmv)
{
    return ((int32_t)dmv - 12500) / 10;     /* 1 mV is 1 mA */
}

void pump_sample(void)
{
    pump.pin_dmv = pin_dmv(adc_fetch(ADC_PUMP));
    pump.current_ma = dmv_to_ma(pump.pin_dmv);
    pump.running = pump.current_ma > 100;
}
