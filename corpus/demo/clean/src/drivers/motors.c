/* Circulation pump (both directions) and aerator (one direction). */
#include "drivers.h"
#include "scale.h"
#include "../hal/par8.h"

int32_t pump_ma(uint16_t code)
{
    int32_t uv = ((int32_t)ACQ_TO_DMV(code) - PUMP_ZERO_DMV) * 100;

    return uv / (PUMP_SHUNT_MOHM * PUMP_GAIN);
}

uint16_t aerator_ma(void)
{
    return par8_mv(PAR8_AERATOR) * 1000u / (AER_SHUNT_MOHM * AER_GAIN);
}
