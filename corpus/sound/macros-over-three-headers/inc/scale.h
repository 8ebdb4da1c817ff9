#include "adc_map.h"
#include "board_values.h"

#define PIN_DMV(what)       (ADC_CODE(what) * AREF_UV_X10 / ADC_STEPS)
#define LOOP_UA(what)       (PIN_DMV(what) * 100u / LOOP_OHM)
#define LOOP_VALUE(what, span) \
    (LOOP_UA(what) <= LOOP_ZERO_UA ? 0u : (LOOP_UA(what) - LOOP_ZERO_UA) * (span) / LOOP_SPAN_UA)
