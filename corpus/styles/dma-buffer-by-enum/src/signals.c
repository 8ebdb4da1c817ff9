#include "signals.h"

__attribute__((section(".dma"))) volatile uint16_t adc_dma[SLOTS];

void signals_init(void)
{
    dma_start(&ADC1->DR, adc_dma, sizeof adc_dma / sizeof adc_dma[0]);
}

uint32_t signal_battery_mv(void)
{
    return (uint32_t)adc_dma[SLOT_BATTERY] * 3300u * 11u / 4096u;
}

int16_t signal_water_x10(void)
{
    int32_t mv = ((int32_t)adc_dma[SLOT_WATER] * 3300) >> 12;

    return (int16_t)(mv - 500);
}
