#include "scale.h"

volatile unsigned short adc_words[8];

unsigned main_kpa_x10(void)
{
    return LOOP_VALUE(PRESSURE, 6000u);
}
