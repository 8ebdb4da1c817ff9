#include <stdint.h>

#define SUMP_INPUT 6u

extern uint16_t adc_last(unsigned input);

uint16_t sump_mv;

static uint16_t scaled(uint16_t code)
{
    uint32_t whole = code / 32u;
    uint32_t rest = code % 32u;

    return (uint16_t)(whole * 6600u / 128u + rest * 6600u / 4096u);
}

void sump_update(void)
{
    sump_mv = scaled(adc_last(SUMP_INPUT));
}
