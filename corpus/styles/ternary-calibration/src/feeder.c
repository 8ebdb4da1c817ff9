#include <stdint.h>

#define HAS_BUFFER  1
#define FEEDER      0
#define DEAD_ZONE   8

static volatile uint16_t adc_last[2];

void adc_done(unsigned which, uint16_t code)
{
    adc_last[which] = code;
}

uint32_t feeder_ma(void)
{
    uint32_t raw = adc_last[FEEDER];
    uint32_t gain = HAS_BUFFER ? 21u : 20u;

    return raw < DEAD_ZONE ? 0u : raw * 3000u / 4096u * 1000u / (50u * gain);
}
