#include <stdint.h>

#define GATE    2

extern uint16_t adc_read(uint8_t ch);

static uint16_t gate_ddeg;

void gate_poll(void)
{
    gate_ddeg = (uint16_t)((uint32_t)adc_read(GATE) * 1000u / 1024u);
}

uint16_t gate_angle(void) { return gate_ddeg; }
