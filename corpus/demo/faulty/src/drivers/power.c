/* Feeder battery, logic supply, 12 V rail. */
#include "drivers.h"
#include "scale.h"
#include "../hal/par8.h"

#define BATTERY_MV(code) (ACQ_TO_DMV(code) * BATT_DIV / 10u)

/* two equal resistors */
#define SUPPLY_MV(code)  DIV_NEAREST((uint32_t)(code) * ACQ_VREF_MV * 2u, ACQ_COUNTS)

uint32_t battery_mv(void)
{
    return BATTERY_MV(acq_code(IN_BATTERY));
}

uint32_t supply_mv(void)
{
    return SUPPLY_MV(acq_code(IN_SUPPLY));
}

uint16_t rail12_mv(void)
{
    return par8_mv(PAR8_RAIL12) * (RAIL_R_TOP_K + RAIL_R_BOT_K) / RAIL_R_BOT_K;
}
