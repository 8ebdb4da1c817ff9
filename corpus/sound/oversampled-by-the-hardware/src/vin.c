#include "chip.h"

unsigned long vin_mv;

void vin_update(void)
{
    vin_mv = (unsigned long)ADC_DATA_REG * 6600ul / 16384ul;
}
