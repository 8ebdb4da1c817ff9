#include "acq.h"

#include "t32w80.h"             /* vendor's register names */

volatile uint16_t acq_dma[ACQ_INPUTS];

void acq_init(void)
{
    CLKCTL->ENABLE |= CLKCTL_ACQ0 | CLKCTL_ACQ1 | CLKCTL_DMA;

    ACQ0->CTRL = ACQ_CTRL_12BIT | ACQ_CTRL_RIGHT | ACQ_CTRL_SCAN;
    ACQ0->SCAN_LEN = ACQ_INPUTS;

    DMA_CH2->SRC = (uint32_t)&ACQ0->RESULT;
    DMA_CH2->DST = (uint32_t)acq_dma;
    DMA_CH2->LEN = ACQ_INPUTS;
    DMA_CH2->CTRL = DMA_CTRL_HALFWORD | DMA_CTRL_CIRCULAR | DMA_CTRL_ON;

    ACQ1->CTRL = ACQ_CTRL_12BIT | ACQ_CTRL_RIGHT | ACQ_CTRL_DIFF | ACQ_CTRL_FREE;

    ACQ0->CTRL |= ACQ_CTRL_START;
    ACQ1->CTRL |= ACQ_CTRL_START;
}

uint16_t acq_code(enum acq_input in)
{
    return acq_dma[in] & ACQ_CODE_MASK;
}

/* 12 bits, two's complement, not extended by the hardware */
uint16_t acq_diff(void)
{
    return (uint16_t)ACQ1->RESULT;
}

/* production test only: spread of the open input over 64 scans */
uint16_t acq_spare_noise(void)
{
    uint16_t low = 4095, high = 0;
    int      i;

    for (i = 0; i < 64; i++) {
        uint16_t c = acq_code(IN_SPARE);
        if (c < low)
            low = c;
        if (c > high)
            high = c;
        wait_scan();
    }
    return high - low;
}
