/* Turbidity sensor: 0.2 V in clear water, 2 mV per NTU. */
#include "drivers.h"
#include "../hal/acq.h"

static const float ref_volts = 3.3f;

static float input_volts(uint16_t code)
{
    return (float)code * (ref_volts / 4096.0f);
}

float turbidity_ntu(void)
{
    float v = input_volts(acq_code(IN_TURBIDITY));

    return (v - 0.2f) / 0.002f;
}
