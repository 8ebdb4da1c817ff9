#include <stdint.h>

#define RESULT_BITS 0x3FF

uint32_t adc_fifo_pop(void);

uint32_t feeder_mv;

void feeder_poll(void)
{
    uint32_t code = adc_fifo_pop() & RESULT_BITS;

    feeder_mv = code * 13200u / 4096u;
}
