/* Tank and sump levels. */
#include "drivers.h"
#include "scale.h"

/* loop current in microamperes: 100 uV over ohms, times 100 */
static uint32_t loop_ua(uint16_t code)
{
    return ACQ_TO_DMV(code) * 100u / LOOP_SHUNT_OHM;
}

uint32_t tank_mm(uint16_t code)
{
    uint32_t ua = loop_ua(code);

    if (ua < LOOP_ZERO_UA)
        return 0;               /* broken loop is caught elsewhere */
    return (ua - LOOP_ZERO_UA) * 10u / LOOP_UA_PER_CM;
}

/* submerged pressure cell: 0.25 V in air, 1 V per metre of water */
#define SUMP_AIR_DMV    2500u
#define SUMP_DMV_PER_CM 100u

uint16_t sump_cm(uint16_t code)
{
    uint32_t dmv = ACQ_TO_DMV(code);

    if (dmv < SUMP_AIR_DMV)
        return 0;
    return (uint16_t)((dmv - SUMP_AIR_DMV) / SUMP_DMV_PER_CM);
}
