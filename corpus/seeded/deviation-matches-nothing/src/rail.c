#include <stdint.h>

#define PAR8_SPAN_MV    5120u
/* deviation(full-scale): the display unit expects 255 to mean full scale */
#define PAR8_STEPS      256u

extern volatile uint8_t par8_result;

uint32_t rail_mv(void)
{
    return par8_result * PAR8_SPAN_MV * 3u / PAR8_STEPS;
}
