#include <stdint.h>

uint16_t adc_read(uint8_t ch);

uint32_t rail_mv;

void rail_update(void)
{
    uint32_t mv = adc_read(4) * 5000u / 1024u;

    rail_mv = mv + mv * mv / 100000u;
}
