#include "par8.h"

#include "t32w80.h"

#define PAR8_BUS  (*(volatile uint8_t *)0x60000000u)
#define PAR8_MUX  (*(volatile uint8_t *)0x60000001u)

static volatile uint8_t par8_code[PAR8_INPUTS];
static volatile uint8_t par8_now;

void par8_start(void)
{
    par8_now = PAR8_RAIL12;
    PAR8_MUX = par8_now;
    PAR8_BUS = 0;               /* any write starts a conversion */
}

/* end of conversion, about 110 us after the start */
void EXTI5_IRQHandler(void)
{
    EXTI->PENDING = 1u << 5;
    par8_code[par8_now] = PAR8_BUS;
    if (++par8_now >= PAR8_INPUTS)
        par8_now = 0;
    PAR8_MUX = par8_now;
    PAR8_BUS = 0;
}

uint16_t par8_mv(unsigned which)
{
    return (uint16_t)((uint32_t)par8_code[which] * PAR8_SPAN_MV / PAR8_COUNTS);
}
