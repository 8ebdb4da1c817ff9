#include <stdint.h>

#define RELIEF_CH       1
#define RELIEF_COUNTS   738

uint16_t adc_read(uint8_t ch);
void valve_open(void);

int32_t relief_kpa_x10(void)
{
    return ((int32_t)adc_read(RELIEF_CH) * 50000 / 1024 - 5000) / 20;
}

void relief_tick(void)
{
    if (adc_read(RELIEF_CH) >= RELIEF_COUNTS)
        valve_open();
}
