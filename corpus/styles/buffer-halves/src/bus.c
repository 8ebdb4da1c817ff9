#include <stdint.h>

#define INPUTS 4

static uint16_t samples[2 * INPUTS];
static volatile uint16_t bus_raw;
float bus_volts;

void dma_half_callback(void)
{
    bus_raw = samples[0];
}

void dma_full_callback(void)
{
    bus_raw = samples[INPUTS];
}

int main(void)
{
    dma_start((uint32_t *)samples, 2 * INPUTS);
    for (;;) {
        bus_volts = bus_raw * (3.3f / 4096.0f) * 11.0f;
        wait_for_interrupt();
    }
}
