#include <stdint.h>
#include "mcu.h"

#define ADC_MAX     4095u

uint32_t vin_mv(void)
{
    uint32_t raw = ADC1->DR;

    return raw * 3300u * 2u / ADC_MAX;
}
