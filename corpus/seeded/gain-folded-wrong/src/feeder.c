#include <stdint.h>

uint16_t adc_get(uint8_t ch);

uint16_t feeder_mv(void)
{
    uint32_t raw = adc_get(0);

    return (uint16_t)(raw * 839u >> 4);
}
