#include <stdint.h>

extern uint16_t adc10_get(uint8_t ch);

/* tenths of a volt; 41/256 is near enough for the bar graph */
uint8_t battery_dv(void)
{
    uint16_t raw = adc10_get(1);

    return (uint8_t)(raw * 41u >> 8);
}
