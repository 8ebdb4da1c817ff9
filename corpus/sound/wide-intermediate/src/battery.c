#include <stdint.h>

#define VREF_UV     3300000ULL

volatile uint16_t samples[4];       /* DMA */

uint32_t battery_uv(void)
{
    return (uint32_t)((uint64_t)samples[1] * VREF_UV * 11u >> 12);
}
