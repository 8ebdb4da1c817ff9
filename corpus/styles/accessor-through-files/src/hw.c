#include "mcu.h"
#include "hw.h"

uint16_t hw_aerator(void)
{
    return (uint16_t)(ADC1->JDR2 & 0xFFF);
}
