/* Oxygen partial pressure, 0.01 kPa a count. Air-saturated water: about 21 kPa. */
#include "drivers.h"
#include "scale.h"

uint32_t oxygen_kpa_x100(void)
{
    uint32_t uv;                /* at the probe */

    uv = ACQ_TO_DMV(acq_code(IN_OXYGEN)) / (10u * O2_AMP_GAIN) * 1000u;
    return uv * 100u / O2_UV_PER_KPA;
}
