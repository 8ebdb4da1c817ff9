#include <stdint.h>
#include "scale.h"

extern volatile uint16_t adc_regs[8];

DEFINE_GETTER(batt, BATT)
DEFINE_GETTER(logic, LOGIC)
