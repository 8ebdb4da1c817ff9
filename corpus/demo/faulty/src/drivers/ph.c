/*
 * pH glass electrode. Reference electrode on the plus input, so that the
 * voltage rises with pH; zero at pH 7. Amplifier 5x, both inputs buffered.
 */
#include "drivers.h"
#include "scale.h"

#define PH_UV_PER_PH    59160
#define PH_AMP_GAIN     5
#define PH_NEUTRAL_X100 700

int16_t ph_x100(void)
{
    int32_t code = acq_diff() & ACQ_CODE_MASK;
    int32_t dmv = code * (ACQ_VREF_MV * 10) / ACQ_DIFF_COUNTS;

    return (int16_t)(PH_NEUTRAL_X100 + dmv * 10000 / (PH_UV_PER_PH * PH_AMP_GAIN));
}
