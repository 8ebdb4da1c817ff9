#include <stdint.h>
#include "maths.h"

extern uint16_t adc_read(uint8_t input);

uint16_t pond_mv;

void pond_task(void)
{
    uint32_t full = smaller(16000, div_closest(adc_read(2) * 3300 * 11, 4096));

    pond_mv = (uint16_t)full;
}
