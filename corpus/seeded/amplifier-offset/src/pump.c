#include <stdint.h>

#define PUMP_ZERO_MV    1500

extern volatile uint16_t adc_pump;

int32_t pump_ma(void)
{
    int32_t dmv = (int32_t)adc_pump * 30000 / 4096;

    return (dmv - PUMP_ZERO_MV * 10) / 5;
}
