#include <stdint.h>

uint16_t adc_read(uint8_t ch);

uint8_t pond_cm;

void pond_update(void)
{
    uint32_t dmv = adc_read(7) * 25000u / 4096u;

    if (dmv > 5000u)
        pond_cm = (dmv - 5000u) / 50u;
    else
        pond_cm = 0;
}
