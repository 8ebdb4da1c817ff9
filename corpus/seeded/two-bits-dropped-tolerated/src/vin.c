#include <stdint.h>

uint16_t adc_read(uint8_t ch);

uint32_t vin_mv(void)
{
    return (uint32_t)(adc_read(2) >> 2) * 6600u / 1024u;
}
