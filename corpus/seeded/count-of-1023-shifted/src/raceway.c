#include <stdint.h>

uint16_t adc_sample(uint8_t input);

uint16_t raceway_mv;

void raceway_poll(void)
{
    raceway_mv = (uint16_t)(adc_sample(2) * 10000UL >> 10);
}
