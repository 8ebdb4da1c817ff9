#include <stdint.h>
#include "part.h"

#define ADC_BITS    10

uint32_t vin_mv(void)
{
    return (uint32_t)ADC1->DR * (3300u * 2u) >> ADC_BITS;
}
