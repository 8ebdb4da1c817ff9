/* Water temperature and inflow pressure, light over the raceway. */
#include "drivers.h"
#include "scale.h"
#include "../hal/par8.h"

#define TEMP_ZERO_MV        500     /* at 0 degC; 10 mV per degC */

#define INFLOW_ZERO_DMV     2500
#define INFLOW_DMV_PER_KPA  250
#define INFLOW_PER_KPA      100     /* counts of the result */

#define LIGHT_MV_PER_LX     2

/* 0.1 degC a count, which is 1 mV */
int16_t water_temp_x10(uint16_t code)
{
    uint32_t mv = (uint16_t)(code * ACQ_VREF_MV) / ACQ_COUNTS;

    return (int16_t)mv - TEMP_ZERO_MV;
}

int32_t inflow_kpa_x10(uint16_t code)
{
    int32_t dmv = (int32_t)ACQ_TO_DMV(code) - INFLOW_ZERO_DMV;

    return dmv * INFLOW_PER_KPA / INFLOW_DMV_PER_KPA;
}

uint16_t light_lx(void)
{
    return par8_mv(PAR8_LIGHT) / LIGHT_MV_PER_LX;
}
