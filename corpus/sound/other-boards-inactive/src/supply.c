#include <stdint.h>
#include "board.h"

uint16_t ADC_Read(uint8_t ch);

uint16_t supply_mv(void)
{
    uint32_t mv;

#if BOARD == BOARD_POND
    if (pond_powered()) {
        mv = ADC_Read(SUPPLY_CH) * VREF_MV / 1000;
#else
    {
        mv = ADC_Read(SUPPLY_CH) * VREF_MV;
#endif
        mv = mv * (DIV_TOP + DIV_BOTTOM);
        mv /= ADC_FS * DIV_BOTTOM;
    }
    return (uint16_t)mv;
}
