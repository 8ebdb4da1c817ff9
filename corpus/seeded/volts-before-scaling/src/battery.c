#include <stdint.h>

uint16_t adc_read(uint8_t ch);

uint32_t battery_mv(void)
{
    return adc_read(2) * 33u / 4096u * 100u * 11u;
}
