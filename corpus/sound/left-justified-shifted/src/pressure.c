#include <stdint.h>
#include "device.h"

uint16_t pressure_mv;

void ADC0_Handler(void)
{
    uint16_t word = ADC0->RES;

    pressure_mv = (uint16_t)((uint32_t)(word >> 4) * 5000u / 4096u);
}
